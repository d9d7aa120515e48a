import { RAD_PER_DEG } from './angles';
import { ringFrame } from './ring';
import { Sight } from './sight';
import type { Site, Zone } from './site';
import { roomInDisc } from './sky-disc';
import { SkyVerdicts, type SkyVerdict } from './sky-verdicts';
import { FASTEST_SUN_RAD_PER_S, sunTracker, type SunPosition } from './sun';
import { CLOSED, horizonVerdict, OPEN, ShareCounter, UNSURE, type Verdict } from './verdict';

/** Longest span of seconds that is halved, a power of two: halves are whole seconds all the way down. */
const LONGEST_SPAN_S = 64;

/** Receives runs of open whole seconds, both ends counted, in order; runs may touch. */
export type RunSink = (firstS: number, lastS: number) => void;

/**
 * Finds every whole second at which a zone is open to the bow, without asking every second.
 *
 * Why nothing is missed. All that is ever assumed of the sun's motion is that it is no faster than
 * FASTEST_SUN_RAD_PER_S, so at every instant within so many seconds of an instant m it is within a disc of
 * radius e about its place at m, by suncalc. Three bounds hold for all suns in a disc:
 * - altitude is within e, and the skyline under it within the least and greatest over the azimuths
 *   that e can reach;
 * - each eye's arc is from AT_LEAST to AT_MOST (see Sight), so each eye has the bow for certain, or has
 *   it not for certain, or is unsure;
 * - so the number of eyes with the bow is from (certain) to (certain + unsure).
 *
 * The search walks along the sun's path. Where it stands in a cell of the sky with one verdict all over,
 * it walks on for as long as the sun can not have left that cell's disc. Where the smallest cell is
 * unsure, it takes a span of seconds in which the sun can not leave the disc, and halves it: each half is
 * judged by the disc about the sun at its middle second, with only the eyes still unsure. A span of one
 * second has e = 0 and is evaluated as it stands, with suncalc's sun at that second. Every second is
 * therefore either evaluated or covered by a bound that holds for it, whatever the share does in
 * between: a flicker, a notch in the skyline or a picket of walls is halved down to its seconds.
 */
export class OpenSearch {
	private readonly site: Site;
	private readonly sight: Sight;
	private readonly sunAt: (instantMs: number) => SunPosition;
	private readonly counter: ShareCounter;
	private readonly sky: SkyVerdicts;
	/** Eyes unsure at each depth of halving. */
	private readonly unsure: Int32Array[];

	constructor(site: Site, zone: Zone) {
		this.site = site;
		this.sight = new Sight(site, zone.eyes);
		this.sunAt = sunTracker(site);
		this.counter = new ShareCounter(site, zone, this.sight);
		this.sky = new SkyVerdicts(site, zone, this.sight, this.counter);
		this.unsure = Array.from(
			{ length: Math.log2(LONGEST_SPAN_S) + 2 },
			() => new Int32Array(zone.eyes.length)
		);
	}

	/** Gives all open seconds from `startS` to below `endS`, seconds since 1970. */
	search(startS: number, endS: number, sink: RunSink): void {
		for (let s = startS; s < endS;) {
			const sun = this.sunAt(s * 1000);
			const belowRad = (this.site.minimumSunAltitudeDeg - sun.altitudeDeg) * RAD_PER_DEG;
			if (belowRad > 0) {
				s += Math.max(1, Math.floor(belowRad / FASTEST_SUN_RAD_PER_S));
				continue;
			}
			const { disc, known } = this.sky.cellOf(sun);
			// Seconds after this one at which the sun is still in the disc.
			const after = Math.floor(roomInDisc(disc, sun) / FASTEST_SUN_RAD_PER_S);
			if (known.verdict !== UNSURE && after >= 0) {
				const last = Math.min(s + after, endS - 1);
				if (known.verdict === OPEN) sink(s, last);
				s = last + 1;
			} else {
				s += this.halve(s, Math.min(after + 1, endS - s), known, sink);
			}
		}
	}

	/**
	 * Goes through a span from second `a` in which the sun does not leave the disc of an unsure cell.
	 * @param most seconds that the span may have; below 1 the sun is outside the disc
	 * @returns seconds that were gone through
	 */
	private halve(a: number, most: number, ofCell: SkyVerdict, sink: RunSink): number {
		let length = 1;
		while (2 * length <= Math.min(most, LONGEST_SPAN_S)) length *= 2;
		const known = most >= 1 ? ofCell : this.sky.nothingKnown;
		this.unsure[0]!.set(known.unsure.subarray(0, known.unsureCount));
		this.visit(a, length, 0, known.share, known.had, known.unsureCount, sink);
		return length;
	}

	/**
	 * @param a first second, @param length seconds, a power of two
	 * @param shareVerdict what is known of the share over the span
	 * @param had eyes certain to have the bow, @param unsureCount how many eyes of this depth are unsure
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
		if (share === UNSURE) {
			this.sight.setSun(ringFrame(sun), reach);
			const asked = { had, unsure: this.unsure[depth]!, unsureCount };
			share = this.counter.judge(asked, this.unsure[depth + 1]!, length === 1);
			nextHad = this.counter.had;
			nextUnsure = this.counter.unsureCount;
		}
		if (share === CLOSED) return;
		if (share === OPEN && horizon === OPEN) {
			sink(a, a + length - 1);
			return;
		}
		this.visit(a, half, depth + 1, share, nextHad, nextUnsure, sink);
		this.visit(a + half, half, depth + 1, share, nextHad, nextUnsure, sink);
	}
}
