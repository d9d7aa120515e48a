import { RAD_PER_DEG } from './angles';
import { azimuthReachDeg } from './horizon';
import { AT_LEAST, AT_MOST, type Sight } from './sight';
import type { Site, Zone } from './site';
import type { SunPosition } from './sun';

/** What is known of all suns within reach. */
export const CLOSED = 0;
export const OPEN = 1;
export const UNSURE = 2;
export type Verdict = typeof CLOSED | typeof OPEN | typeof UNSURE;

/** Added to a bound, in degrees, so that its own rounding never makes it a lie. */
export const ROUNDING_DEG = 1e-9;

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

/** Eyes of a zone that a verdict is still out on, after those that are certain. */
export interface ShareCount {
	/** Eyes certain to have the bow. */
	readonly had: number;
	/** Numbers of the eyes that are unsure, the first `unsureCount` of the list. */
	readonly unsure: Int32Array;
	readonly unsureCount: number;
}

/** Counts the eyes of a zone that have the bow, as far as is needed to settle the rule. */
export class ShareCounter {
	private readonly sight: Sight;
	private readonly leastEyes: number;
	private readonly minimumArcDeg: number;
	/** Which bound settled an eye last: it is tried first. */
	private readonly lastHad: Uint8Array;

	constructor(site: Site, zone: Zone, sight: Sight) {
		this.sight = sight;
		this.leastEyes = zone.leastEyes;
		this.minimumArcDeg = site.minimumArcDeg;
		this.lastHad = new Uint8Array(zone.eyes.length);
	}

	/** Eyes certain to have the bow, and eyes still unsure, after the last `judge`. */
	had = 0;
	unsureCount = 0;

	/**
	 * Asks the eyes that are still unsure whether they have the bow, for all suns within the reach that
	 * the sight is set to. It stops as soon as enough are certain to have it, or so few are left that it
	 * can not be reached; otherwise `still` receives those that stay unsure.
	 * @param exactly the reach is nought
	 */
	judge({ had, unsure, unsureCount }: ShareCount, still: Int32Array, exactly: boolean): Verdict {
		const least = this.leastEyes;
		let possible = had + unsureCount;
		this.had = had;
		let left = 0;
		for (let i = 0; i < unsureCount; i++) {
			const e = unsure[i]!;
			const has = exactly ? this.hasBowNow(e) : this.hasBow(e);
			if (has === OPEN) {
				this.had++;
				if (this.had >= least) return OPEN;
			} else if (has === CLOSED) {
				possible--;
				if (possible < least) return CLOSED;
			} else still[left++] = e;
		}
		this.unsureCount = left;
		return UNSURE;
	}

	private hasBowNow(e: number): Verdict {
		return this.sight.arcDeg(e) >= this.minimumArcDeg ? OPEN : CLOSED;
	}

	private hasBow(e: number): Verdict {
		const { lastHad, minimumArcDeg, sight } = this;
		const first = lastHad[e]! === 1;
		for (let turn = 0; turn < 2; turn++) {
			if ((turn === 0) === first) {
				if (sight.arcDeg(e, AT_LEAST) >= minimumArcDeg + ROUNDING_DEG) {
					lastHad[e] = 1;
					return OPEN;
				}
			} else if (sight.arcDeg(e, AT_MOST) < minimumArcDeg - ROUNDING_DEG) {
				lastHad[e] = 0;
				return CLOSED;
			}
		}
		return UNSURE;
	}
}
