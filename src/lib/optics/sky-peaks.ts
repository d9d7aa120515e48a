import { ringFrame } from './ring';
import { AT_LEAST, AT_MOST, type Sight } from './sight';
import type { Site, Zone } from './site';
import { discHolds, SkyMap, type SkyCell, type SkyDisc } from './sky-disc';
import { ROUNDING_DEG } from './verdict';

/** What the peaks can be, at most, for all suns of a disc. */
export interface PeakBound {
	/** Eyes certain to have the bow, and eyes that may have it or not. */
	readonly certain: Int32Array;
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
	private readonly everyEye: { certain: Int32Array; unsure: Int32Array };
	private readonly certain: Int32Array;
	private readonly unsure: Int32Array;
	private readonly certainArcs: Float64Array;
	private readonly unsureArcs: Float64Array;

	constructor(site: Site, zone: Zone, sight: Sight) {
		const count = zone.eyes.length;
		this.sight = sight;
		this.minimumArcDeg = site.minimumArcDeg;
		this.everyEye = {
			certain: new Int32Array(0),
			unsure: Int32Array.from(zone.eyes, (_, e) => e)
		};
		this.certain = new Int32Array(count);
		this.unsure = new Int32Array(count);
		this.certainArcs = new Float64Array(count);
		this.unsureArcs = new Float64Array(count);
		this.map = new SkyMap((disc, parent) => this.bound(disc, parent));
	}

	private bound(disc: SkyDisc, parent: SkyCell<PeakBound> | null): PeakBound {
		const { sight, minimumArcDeg } = this;
		const before = parent && discHolds(parent.disc, disc) ? parent.known : this.everyEye;
		sight.setSun(ringFrame(disc.sun), disc.reachRad);
		let c = 0;
		let u = 0;
		for (const e of before.certain) {
			this.certain[c] = e;
			this.certainArcs[c++] = sight.arcDeg(e, AT_MOST);
		}
		for (const e of before.unsure) {
			const most = sight.arcDeg(e, AT_MOST);
			if (most < minimumArcDeg - ROUNDING_DEG) continue;
			if (sight.arcDeg(e, AT_LEAST) >= minimumArcDeg + ROUNDING_DEG) {
				this.certain[c] = e;
				this.certainArcs[c++] = most;
			} else {
				this.unsure[u] = e;
				this.unsureArcs[u++] = most;
			}
		}
		const medianDeg = medianBound(
			this.certainArcs.subarray(0, c).sort(),
			this.unsureArcs.subarray(0, u).sort()
		);
		return {
			certain: this.certain.slice(0, c),
			unsure: this.unsure.slice(0, u),
			mostEyes: c + u,
			medianAtMostDeg: medianDeg + ROUNDING_DEG
		};
	}
}
