import { standsIn } from './area';
import { boundingBox } from '../optics/polygon';
import type { Ground, Placement } from './question';

/**
 * The i-th number of van der Corput's sequence in a base: the digits of i mirrored behind the point.
 * @param i 1 or more
 */
export function radicalInverse(i: number, base: number): number {
	let part = 1;
	let value = 0;
	for (let rest = i; rest > 0; rest = Math.floor(rest / base)) {
		part /= base;
		value += part * (rest % base);
	}
	return value;
}

/** A narrow area takes few of the placements about it: no more are tried for each that is wanted. */
const TRIES_PER_PLACEMENT = 100;

/** Parts of the way that a curtain can slide along an edge of the area at which it is tried. */
const SLIDES = 5;

/** Placements along the area's edges: the best is often as near or as far as it may be, and a strip has no others. */
function alongEdges(area: readonly Ground[], lengthM: number): Placement[] {
	return area.flatMap((a, i) => {
		const b = area[(i + 1) % area.length]!;
		const edgeM = Math.hypot(b[0] - a[0], b[1] - a[1]);
		if (edgeM < lengthM) return [];
		const bearing = (Math.atan2(b[0] - a[0], b[1] - a[1]) * 180) / Math.PI;
		const room = (edgeM - lengthM) / edgeM;
		return Array.from({ length: SLIDES }, (_, slide) => {
			const middle = lengthM / 2 / edgeM + (room * slide) / (SLIDES - 1);
			return {
				x: a[0] + middle * (b[0] - a[0]),
				y: a[1] + middle * (b[1] - a[1]),
				bearingDeg: ((bearing % 180) + 180) % 180
			};
		});
	});
}

/**
 * Placements spread evenly over all that stand wholly in an area, in place and bearing: those along its
 * edges, then Halton's sequence in the bases 2, 3 and 5 over the box about the area, less what does not fit
 * (Halton, "On the efficiency of certain quasi-random sequences of points in evaluating multi-dimensional
 * integrals", Numerische Mathematik 2, 1960). The same area gives the same placements.
 * @param count how many are wanted, 1 or more; fewer come from an area into which hardly any fit
 */
export function placementField(
	area: readonly Ground[],
	lengthM: number,
	count: number
): Placement[] {
	const { west, east, south, north } = boundingBox(area);
	const found = alongEdges(area, lengthM)
		.filter((placement) => standsIn(area, placement, lengthM))
		.slice(0, count);
	for (let i = 1; found.length < count && i <= count * TRIES_PER_PLACEMENT; i++) {
		const placement = {
			x: west + radicalInverse(i, 2) * (east - west),
			y: south + radicalInverse(i, 3) * (north - south),
			bearingDeg: radicalInverse(i, 5) * 180
		};
		if (standsIn(area, placement, lengthM)) found.push(placement);
	}
	return found;
}
