import { ringFrame } from './ring';
import type { Sight } from './sight';
import type { Site, Zone } from './site';
import { discHolds, SkyMap, type SkyCell, type SkyDisc } from './sky-disc';
import type { SunPosition } from './sun';
import {
	CLOSED,
	horizonVerdict,
	OPEN,
	UNSURE,
	type ShareCount,
	type ShareCounter,
	type Verdict
} from './verdict';

/** Times that a cell may be quartered. Smaller ones are rarely met twice in a year. */
const DEEPEST = 4;

/** What a zone's rule comes to for all suns of a disc. */
export interface SkyVerdict extends ShareCount {
	/** Whether the zone is open, horizon and share together. */
	readonly verdict: Verdict;
	/** Whether the share reaches the rule. */
	readonly share: Verdict;
}

/**
 * What a zone's rule comes to, all over the sky, worked out as far as it is asked for.
 *
 * Whether a zone is open depends on where the sun stands and on nothing else, and in a year the sun
 * passes every part of its belt of sky many times. So what is found out for a cell of the sky is kept. A
 * cell that is neither open nor closed all over is quartered, and only its unsure eyes are asked again
 * (when the quarter's disc lies in its own: otherwise all are).
 */
export class SkyVerdicts {
	/** What is known without looking. */
	readonly nothingKnown: SkyVerdict;
	private readonly site: Site;
	private readonly sight: Sight;
	private readonly counter: ShareCounter;
	private readonly map: SkyMap<SkyVerdict>;
	private readonly still: Int32Array;

	constructor(site: Site, zone: Zone, sight: Sight, counter: ShareCounter) {
		this.site = site;
		this.sight = sight;
		this.counter = counter;
		this.map = new SkyMap((disc, parent) => this.judge(disc, parent));
		this.still = new Int32Array(zone.eyes.length);
		this.nothingKnown = {
			verdict: UNSURE,
			share: UNSURE,
			had: 0,
			unsure: Int32Array.from(zone.eyes, (_, e) => e),
			unsureCount: zone.eyes.length
		};
	}

	/** The largest cell about a sun that is certain, or the smallest there is. */
	cellOf(sun: SunPosition): SkyCell<SkyVerdict> {
		let cell = this.map.cellOf(sun);
		while (cell.known.verdict === UNSURE && cell.disc.depth < DEEPEST) {
			cell = this.map.quarterOf(cell, sun);
		}
		return cell;
	}

	private judge(disc: SkyDisc, parent: SkyCell<SkyVerdict> | null): SkyVerdict {
		const horizon = horizonVerdict(this.site, disc.sun, disc.reachRad);
		if (horizon === CLOSED) return { ...this.nothingKnown, verdict: CLOSED };
		const before = parent && discHolds(parent.disc, disc) ? parent.known : this.nothingKnown;
		let share = before.share;
		if (share === UNSURE) {
			this.sight.setSun(ringFrame(disc.sun), disc.reachRad);
			share = this.counter.judge(before, this.still, false);
			if (share === UNSURE) {
				const { had, unsureCount } = this.counter;
				const unsure = this.still.slice(0, unsureCount);
				return { verdict: UNSURE, share, had, unsure, unsureCount };
			}
		}
		return { ...before, verdict: share === OPEN ? horizon : CLOSED, share };
	}
}
