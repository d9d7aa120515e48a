import { ringFrame } from './ring';
import { AT_LEAST, AT_MOST, type Sight } from './sight';
import type { Site, Zone } from './site';
import { discHolds, SkyMap, type SkyCell, type SkyDisc } from './sky-disc';
import { ROUNDING_DEG } from './verdict';

/** What the peaks can be, at most, for all suns of a disc. */
export interface PeakBound {
	/** Eyes certain to have the bow, by what their arcs are at most, ascending. */
	readonly certain: Int32Array;
	/** What the arc of each of them is at most, degrees. */
	readonly certainAtMostDeg: Float64Array;
	/** Eyes that may have the bow or not; all others have it not. */
	readonly unsure: Int32Array;
	/** No sun of the disc shows the bow to more eyes. */
	readonly mostEyes: number;
	/** No sun of the disc shows a greater median arc over the eyes that have the bow, degrees. */
	readonly medianAtMostDeg: number;
}

/**
 * Least bound on the median of some numbers, of which each is only known not to exceed a bound, and some
 * may be absent.
 *
 * Of the numbers that are there, `certain` are sure to be and `unsure` may be. When more of the certain
 * have bounds of at most T than there are bounds above T in both lists, then most of the numbers there
 * are T or less, and the median is too. The least such T among the bounds is given.
 *
 * @param certain bounds, ascending, @param unsure bounds, ascending
 */
export function medianBound(certain: Float64Array, unsure: Float64Array): number {
	let c = certain.length;
	let u = unsure.length;
	let bound = Math.max(c > 0 ? certain[c - 1]! : 0, u > 0 ? unsure[u - 1]! : 0);
	// Candidates for T descend; c and u are the numbers of bounds at most T.
	while (c > 0 || u > 0) {
		const t = Math.max(c > 0 ? certain[c - 1]! : -1, u > 0 ? unsure[u - 1]! : -1);
		const above = certain.length - c + (unsure.length - u);
		if (!(c > above)) break;
		bound = t;
		while (c > 0 && certain[c - 1]! >= t) c--;
		while (u > 0 && unsure[u - 1]! >= t) u--;
	}
	return bound;
}

/** Bounds of a zone's peaks all over the sky, worked out as far as they are asked for. */
export class SkyPeaks {
	readonly map: SkyMap<PeakBound>;
	private readonly sight: Sight;
	private readonly minimumArcDeg: number;
	private readonly everyEye: Pick<PeakBound, 'certain' | 'unsure'>;
	/** What each eye's arc is at most in the disc that is being looked at. */
	private readonly atMostDeg: Float64Array;

	constructor(site: Site, zone: Zone, sight: Sight) {
		const count = zone.eyes.length;
		this.sight = sight;
		this.minimumArcDeg = site.minimumArcDeg;
		this.everyEye = {
			certain: new Int32Array(0),
			unsure: Int32Array.from(zone.eyes, (_, e) => e)
		};
		this.atMostDeg = new Float64Array(count);
		this.map = new SkyMap((disc, parent) => this.bound(disc, parent));
	}

	private bound(disc: SkyDisc, parent: SkyCell<PeakBound> | null): PeakBound {
		const { sight, minimumArcDeg } = this;
		const before = parent && discHolds(parent.disc, disc) ? parent.known : this.everyEye;
		sight.setSun(ringFrame(disc.sun), disc.reachRad);
		const { atMostDeg } = this;
		const certain: number[] = [];
		const unsure: number[] = [];
		for (const e of before.certain) {
			atMostDeg[e] = sight.arcDeg(e, AT_MOST) + ROUNDING_DEG;
			certain.push(e);
		}
		for (const e of before.unsure) {
			const most = sight.arcDeg(e, AT_MOST) + ROUNDING_DEG;
			if (most < minimumArcDeg) continue;
			atMostDeg[e] = most;
			const has = sight.arcDeg(e, AT_LEAST) >= minimumArcDeg + ROUNDING_DEG;
			(has ? certain : unsure).push(e);
		}
		certain.sort((a, b) => atMostDeg[a]! - atMostDeg[b]!);
		const certainAtMostDeg = Float64Array.from(certain, (e) => atMostDeg[e]!);
		return {
			certain: Int32Array.from(certain),
			certainAtMostDeg,
			unsure: Int32Array.from(unsure),
			mostEyes: certain.length + unsure.length,
			medianAtMostDeg: medianBound(
				certainAtMostDeg,
				Float64Array.from(unsure, (e) => atMostDeg[e]!).sort()
			)
		};
	}
}
