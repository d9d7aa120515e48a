import { ringFrame } from './ring';
import type { Sight } from './sight';
import type { Site, Zone } from './site';
import type { SunPosition } from './sun';

/** Peaks are looked for at whole multiples of this many seconds UTC. */
export const PEAK_STEP_S = 300;

/** Median of the first `count` numbers, which are put in order; the mean of the middle two if even. */
export function medianOf(values: Float64Array, count: number): number {
	const sorted = values.subarray(0, count).sort();
	const middle = count >> 1;
	return count % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}

/**
 * The greatest share of a window and the greatest median arc over the eyes that have the bow, over the
 * instants in the window that are whole multiples of five minutes UTC, and its two ends. Instants in a
 * gap of under 60 s, which the window has closed, count as the window's; one at which no eye has the bow
 * has no median.
 */
export function findPeaks({
	site,
	zone,
	sight,
	sunAt,
	startS,
	endS
}: {
	site: Site;
	zone: Zone;
	sight: Sight;
	sunAt: (instantMs: number) => SunPosition;
	startS: number;
	endS: number;
}): { peakShare: number; peakArcDeg: number } {
	const arcs = new Float64Array(zone.eyes.length);
	let most = 0;
	let peakArcDeg = 0;
	const look = (second: number) => {
		sight.setSun(ringFrame(sunAt(second * 1000)));
		let have = 0;
		for (let e = 0; e < zone.eyes.length; e++) {
			const arc = sight.arcDeg(e);
			if (arc >= site.minimumArcDeg) arcs[have++] = arc;
		}
		most = Math.max(most, have);
		if (have > 0) peakArcDeg = Math.max(peakArcDeg, medianOf(arcs, have));
	};
	look(startS);
	look(endS);
	for (let s = (Math.floor(startS / PEAK_STEP_S) + 1) * PEAK_STEP_S; s < endS; s += PEAK_STEP_S) {
		look(s);
	}
	return { peakShare: most / zone.eyes.length, peakArcDeg };
}
