import { ringFrame } from './ring';
import { Sight } from './sight';
import type { Site, Zone } from './site';
import type { SkyCell } from './sky-disc';
import { SkyPeaks, type PeakBound } from './sky-peaks';
import { sunTracker, type SunPosition } from './sun';

/** Peaks are looked for at whole multiples of this many seconds UTC. */
export const PEAK_STEP_S = 300;

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
		// The most promising first: it settles most of the others.
		candidates.sort((a, b) => b.cell.known.medianAtMostDeg - a.cell.known.medianAtMostDeg);
		for (const candidate of candidates) {
			this.settle(candidate, ({ medianAtMostDeg }) => medianAtMostDeg > this.medianDeg);
		}
		for (const candidate of candidates) {
			if (this.mostEyes === this.zone.eyes.length) break;
			this.settle(candidate, ({ mostEyes }) => mostEyes > this.mostEyes);
		}
		return { peakShare: this.mostEyes / this.zone.eyes.length, peakArcDeg: this.medianDeg };
	}

	private candidatesOf(startS: number, endS: number): Candidate[] {
		const candidates: Candidate[] = [];
		const add = (second: number) => {
			const sun = this.sunAt(second * 1000);
			candidates.push({ sun, cell: this.sky.map.cellOf(sun), looked: false });
		};
		add(startS);
		add(endS);
		for (let s = (Math.floor(startS / PEAK_STEP_S) + 1) * PEAK_STEP_S; s < endS; s += PEAK_STEP_S) {
			add(s);
		}
		return candidates;
	}

	/** Looks at an instant, unless a cell about it shows that it holds no peak. */
	private settle(candidate: Candidate, mayPeak: (bound: PeakBound) => boolean): void {
		if (candidate.looked) return;
		while (mayPeak(candidate.cell.known)) {
			if (candidate.cell.disc.depth === DEEPEST) {
				this.look(candidate.sun);
				candidate.looked = true;
				return;
			}
			candidate.cell = this.sky.map.quarterOf(candidate.cell, candidate.sun);
		}
	}

	private look(sun: SunPosition): void {
		const { arcs, sight } = this;
		sight.setSun(ringFrame(sun));
		let have = 0;
		for (let e = 0; e < this.zone.eyes.length; e++) {
			const arc = sight.arcDeg(e);
			if (arc >= this.site.minimumArcDeg) arcs[have++] = arc;
		}
		this.mostEyes = Math.max(this.mostEyes, have);
		if (have > 0) this.medianDeg = Math.max(this.medianDeg, medianOf(arcs, have));
	}
}
