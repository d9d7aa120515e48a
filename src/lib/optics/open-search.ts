import { RAD_PER_DEG } from './angles';
import { azimuthReachDeg } from './horizon';
import { ringFrame } from './ring';
import { AT_LEAST, AT_MOST, Sight } from './sight';
import type { Site, Zone } from './site';
import { FASTEST_SUN_RAD_PER_S, sunTracker, type SunPosition } from './sun';

/** What is known of a span of time. */
const CLOSED = 0;
const OPEN = 1;
const UNSURE = 2;
type Verdict = typeof CLOSED | typeof OPEN | typeof UNSURE;

/** Spans of this many seconds and less are asked for the share; longer ones for the horizon alone. */
const LONGEST_SHARE_SPAN_S = 1024;

/** Seconds that one root span covers. A power of two: halves are whole seconds all the way down. */
export const ROOT_SPAN_S = 8192;

/** Added to a bound, in degrees, so that its own rounding never makes it a lie. */
const ROUNDING_DEG = 1e-9;

/** Receives runs of open whole seconds, both ends counted, in order; runs may touch. */
export type RunSink = (firstS: number, lastS: number) => void;

/**
 * Finds every whole second at which a zone is open to the bow, without asking every second.
 *
 * Why nothing is missed. A span of seconds [a, b] is judged from the sun at its middle second m, by
 * suncalc. At every instant of the span the sun is within e = FASTEST_SUN * max(m - a, b - m) of that
 * place. Three bounds hold for all suns that near:
 * - its altitude is within e, and the skyline under it within the least and greatest over the azimuths
 *   that e can reach;
 * - each eye's arc is from AT_LEAST to AT_MOST (see Sight), so each eye has the bow for certain, or has
 *   it not for certain, or is unsure;
 * - so the number of eyes with the bow is from (certain) to (certain + unsure).
 * When these decide the rule the whole span has one verdict. Otherwise it is halved, and only the eyes
 * still unsure are asked again: what was certain for the span is certain for its halves. A span of one
 * second has e = 0 and is evaluated as it stands, with suncalc's sun at that second. Every second is
 * therefore either evaluated or covered by a bound that holds for it, whatever the share does in
 * between: a flicker, a notch in the skyline or a picket of walls is halved down to its seconds.
 *
 * Certainty comes fast where it can: the count stops as soon as enough eyes are certain to have the bow,
 * or so few are left that it can not be reached.
 */
export class OpenSearch {
	private readonly site: Site;
	private readonly zone: Zone;
	private readonly sight: Sight;
	private readonly sunAt: (instantMs: number) => SunPosition;
	/** Eyes unsure at each depth of halving. */
	private readonly unsure: Int32Array[] = [];
	/** Which bound settled an eye last: it is tried first. */
	private readonly lastHad: Uint8Array;

	constructor(site: Site, zone: Zone) {
		this.site = site;
		this.zone = zone;
		this.sight = new Sight(site, zone.eyes);
		this.sunAt = sunTracker(site);
		this.lastHad = new Uint8Array(zone.eyes.length);
	}

	/** Gives all open seconds from `startS` to below `startS + ROOT_SPAN_S`, seconds since 1970. */
	search(startS: number, sink: RunSink): void {
		const all = this.unsureAt(0);
		for (let e = 0; e < all.length; e++) all[e] = e;
		this.visit(startS, ROOT_SPAN_S, 0, UNSURE, 0, all.length, sink);
	}

	private unsureAt(depth: number): Int32Array {
		return (this.unsure[depth] ??= new Int32Array(this.zone.eyes.length));
	}

	/**
	 * @param a first second, @param length seconds, a power of two
	 * @param shareVerdict what is known of the share over the span
	 * @param had eyes certain to have the bow, @param open how many eyes of this depth are unsure
	 */
	private visit(
		a: number,
		length: number,
		depth: number,
		shareVerdict: Verdict,
		had: number,
		unsureCount: number,
		sink: RunSink
	): void {
		const half = length >> 1;
		const reach = length === 1 ? 0 : FASTEST_SUN_RAD_PER_S * half;
		const sun = this.sunAt((a + half) * 1000);
		const horizon = horizonVerdict(this.site, sun, reach);
		if (horizon === CLOSED) return;
		let share = shareVerdict;
		let nextHad = had;
		let nextUnsure = unsureCount;
		if (share === UNSURE && length <= LONGEST_SHARE_SPAN_S) {
			this.sight.setSun(ringFrame(sun), reach);
			const eyes = this.unsureAt(depth);
			const still = this.unsureAt(depth + 1);
			const least = this.zone.leastEyes;
			const { minimumArcDeg } = this.site;
			let left = 0;
			let possible = had + unsureCount;
			for (let i = 0; i < unsureCount; i++) {
				const e = eyes[i]!;
				const has = this.hasBow(e, length === 1, minimumArcDeg);
				if (has === OPEN) {
					nextHad++;
					if (nextHad >= least) break;
				} else if (has === CLOSED) {
					possible--;
					if (possible < least) break;
				} else still[left++] = e;
			}
			nextUnsure = left;
			if (nextHad >= least) share = OPEN;
			else if (possible < least) share = CLOSED;
		} else if (share === UNSURE) {
			this.unsureAt(depth + 1).set(this.unsureAt(depth).subarray(0, unsureCount));
		}
		if (share === CLOSED) return;
		if (share === OPEN && horizon === OPEN) {
			sink(a, a + length - 1);
			return;
		}
		this.visit(a, half, depth + 1, share, nextHad, nextUnsure, sink);
		this.visit(a + half, half, depth + 1, share, nextHad, nextUnsure, sink);
	}

	private hasBow(e: number, exactly: boolean, minimumArcDeg: number): Verdict {
		if (exactly) return this.sight.arcDeg(e) >= minimumArcDeg ? OPEN : CLOSED;
		const first = this.lastHad[e]! === 1;
		for (let turn = 0; turn < 2; turn++) {
			if ((turn === 0) === first) {
				if (this.sight.arcDeg(e, AT_LEAST) >= minimumArcDeg + ROUNDING_DEG) {
					this.lastHad[e] = 1;
					return OPEN;
				}
			} else if (this.sight.arcDeg(e, AT_MOST) < minimumArcDeg - ROUNDING_DEG) {
				this.lastHad[e] = 0;
				return CLOSED;
			}
		}
		return UNSURE;
	}
}

/** Whether the sun is above the rule's altitude and the skyline, for all suns within reach. */
export function horizonVerdict(site: Site, sun: SunPosition, reachRad: number): Verdict {
	const { altitudeDeg, azimuthDeg } = sun;
	if (reachRad === 0) {
		return altitudeDeg >= site.minimumSunAltitudeDeg &&
			altitudeDeg > site.horizon.altitudeDegAt(azimuthDeg)
			? OPEN
			: CLOSED;
	}
	const reachDeg = reachRad / RAD_PER_DEG + ROUNDING_DEG;
	if (altitudeDeg + reachDeg < site.minimumSunAltitudeDeg) return CLOSED;
	const { least, greatest } = site.horizon.boundsDeg(
		azimuthDeg,
		azimuthReachDeg(altitudeDeg, reachRad) + ROUNDING_DEG
	);
	if (altitudeDeg + reachDeg <= least) return CLOSED;
	return altitudeDeg - reachDeg >= site.minimumSunAltitudeDeg && altitudeDeg - reachDeg > greatest
		? OPEN
		: UNSURE;
}
