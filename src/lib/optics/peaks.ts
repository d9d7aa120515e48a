import { ringFrame } from './ring';
import { Sight } from './sight';
import type { Site, Zone } from './site';
import type { SkyCell } from './sky-disc';
import { SkyPeaks, type PeakBound } from './sky-peaks';
import { sunTracker, type SunPosition } from './sun';

/** Peaks are looked for at whole multiples of this many seconds UTC. */
export const PEAK_STEP_S = 300;

const DAY_S = 86_400;

/** Peaks that are remembered: a day may have several windows. */
const PEAKS_KEPT = 4;

/** Times that a cell of the sky may be quartered before an instant in it is looked at itself. */
const DEEPEST = 2;

/** Median of the first `count` numbers, which are put in order; the mean of the middle two if even. */
export function medianOf(values: Float64Array, count: number): number {
	const sorted = values.subarray(0, count).sort();
	const middle = count >> 1;
	return count % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}

/** An instant of a window with what is known of it. */
interface Candidate {
	/** Whole seconds since 1970. */
	readonly second: number;
	readonly sun: SunPosition;
	cell: SkyCell<PeakBound>;
	looked: boolean;
}

/**
 * Finds the peaks of windows of one zone: the greatest share, and the greatest median arc over the eyes
 * that have the bow, over the instants in the window that are whole multiples of five minutes UTC, and
 * its two ends. Instants in a gap of under 60 s, which the window has closed, count as the window's; one
 * at which no eye has the bow has no median.
 *
 * Only instants that may hold a peak are looked at: the sun of every other stands in a cell of the sky
 * whose bound is no greater than what was seen already.
 */
export class PeakFinder {
	private readonly site: Site;
	private readonly zone: Zone;
	private readonly sight: Sight;
	private readonly sunAt: (instantMs: number) => SunPosition;
	private readonly sky: SkyPeaks;
	private readonly arcs: Float64Array;
	/** When the last windows had their greatest medians, seconds since 1970. */
	private readonly lastPeaksS: number[] = [];
	private mostEyes = 0;
	private medianDeg = 0;

	constructor(site: Site, zone: Zone) {
		this.site = site;
		this.zone = zone;
		this.sight = new Sight(site, zone.eyes);
		this.sunAt = sunTracker(site);
		this.sky = new SkyPeaks(site, zone, this.sight);
		this.arcs = new Float64Array(zone.eyes.length);
	}

	/** @param startS first second of a window, @param endS last second */
	find(startS: number, endS: number): { peakShare: number; peakArcDeg: number } {
		const candidates = this.candidatesOf(startS, endS);
		this.mostEyes = 0;
		this.medianDeg = 0;
		this.climb(candidates);
		// The most promising first: it may settle others.
		candidates.sort((a, b) => b.cell.known.medianAtMostDeg - a.cell.known.medianAtMostDeg);
		for (const candidate of candidates) {
			const mayPeak = ({ medianAtMostDeg }: PeakBound) => medianAtMostDeg > this.medianDeg;
			if (this.narrow(candidate, mayPeak) && this.mayBeatMedian(candidate)) this.look(candidate);
		}
		for (const candidate of candidates) {
			if (this.mostEyes === this.zone.eyes.length) break;
			if (this.narrow(candidate, ({ mostEyes }) => mostEyes > this.mostEyes)) this.look(candidate);
		}
		return { peakShare: this.mostEyes / this.zone.eyes.length, peakArcDeg: this.medianDeg };
	}

	/**
	 * Looks where one of the last windows had its peak, by the time of day, and on from there as long as the median
	 * grows: what is seen first settles most of the other instants.
	 * @param candidates in order of time
	 */
	private climb(candidates: readonly Candidate[]): void {
		const apart = ({ second }: Candidate) =>
			this.lastPeaksS.reduce((least, peakS) => {
				const turned = Math.abs(second - peakS) % DAY_S;
				return Math.min(least, turned, DAY_S - turned);
			}, DAY_S);
		let at = candidates.reduce((best, c, i) => (apart(c) < apart(candidates[best]!) ? i : best), 0);
		this.look(candidates[at]!);
		for (const step of [1, -1]) {
			let next = candidates[at + step];
			for (; next && !next.looked; next = candidates[at + step]) {
				const before = this.medianDeg;
				this.look(next);
				if (this.medianDeg <= before) break;
				at += step;
			}
		}
		this.lastPeaksS.unshift(candidates[at]!.second);
		this.lastPeaksS.splice(PEAKS_KEPT);
	}

	private candidatesOf(startS: number, endS: number): Candidate[] {
		const candidates: Candidate[] = [];
		const add = (second: number) => {
			const sun = this.sunAt(second * 1000);
			candidates.push({ second, sun, cell: this.sky.map.cellOf(sun), looked: false });
		};
		add(startS);
		for (let s = (Math.floor(startS / PEAK_STEP_S) + 1) * PEAK_STEP_S; s < endS; s += PEAK_STEP_S) {
			add(s);
		}
		add(endS);
		return candidates;
	}

	/** Quarters the cell about an instant as long as it may hold a peak; whether the last one still may. */
	private narrow(candidate: Candidate, mayPeak: (bound: PeakBound) => boolean): boolean {
		if (candidate.looked) return false;
		while (mayPeak(candidate.cell.known)) {
			if (candidate.cell.disc.depth === DEEPEST) return true;
			candidate.cell = this.sky.map.quarterOf(candidate.cell, candidate.sun);
		}
		return false;
	}

	/**
	 * Whether an instant may have a greater median than was seen so far: not when of the eyes that may have
	 * the bow more have at most that arc than do not. What the cell says of its eyes counts without a look;
	 * the others are looked at, those that are likely to settle it first.
	 */
	private mayBeatMedian({ sun, cell }: Candidate): boolean {
		const { sight, medianDeg } = this;
		const { certain, certainAtMostDeg, unsure, mostEyes } = cell.known;
		let possible = mostEyes;
		let notAbove = 0;
		while (notAbove < certain.length && certainAtMostDeg[notAbove]! <= medianDeg) notAbove++;
		const settled = notAbove;
		sight.setSun(ringFrame(sun));
		for (let i = settled; i < mostEyes && 2 * notAbove <= possible; i++) {
			const e = i < certain.length ? certain[i]! : unsure[i - certain.length]!;
			const arc = sight.arcDeg(e);
			if (arc < this.site.minimumArcDeg) possible--;
			else if (arc <= medianDeg) notAbove++;
		}
		return 2 * notAbove <= possible;
	}

	/** Looks at every eye at an instant. */
	private look(candidate: Candidate): void {
		const { arcs, sight } = this;
		sight.setSun(ringFrame(candidate.sun));
		let have = 0;
		for (let e = 0; e < this.zone.eyes.length; e++) {
			const arc = sight.arcDeg(e);
			if (arc >= this.site.minimumArcDeg) arcs[have++] = arc;
		}
		this.mostEyes = Math.max(this.mostEyes, have);
		if (have > 0) this.medianDeg = Math.max(this.medianDeg, medianOf(arcs, have));
		candidate.looked = true;
	}
}
