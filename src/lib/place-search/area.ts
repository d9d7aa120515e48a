import { latticePlaces } from '../optics/lattice';
import { crossesItself, crossingsAt, distanceToOutline, polygonArea } from '../optics/polygon';
import { endsOf, type Ground, type Placement } from './question';

/** A place this near to the edge is on it, metres: the ends of a curtain are written to the millimetre. */
const EDGE_M = 1e-3;

/** Whether a place lies in an area, its edge counted, by the even-odd rule. */
export function placeInArea(area: readonly Ground[], [x, y]: Ground): boolean {
	let inside = false;
	for (const crossing of crossingsAt(area, y)) if (crossing < x) inside = !inside;
	return inside || distanceToOutline(area, [x, y]) <= EDGE_M;
}

/** The parts t of the way from a to b, 0 to 1, at which the segment meets the line of an area's edge. */
function meetings(area: readonly Ground[], a: Ground, b: Ground): number[] {
	const dx = b[0] - a[0];
	const dy = b[1] - a[1];
	const found = [0, 1];
	for (let i = 0; i < area.length; i++) {
		const c = area[i]!;
		const d = area[(i + 1) % area.length]!;
		const ex = d[0] - c[0];
		const ey = d[1] - c[1];
		const across = dx * ey - dy * ex;
		if (across === 0) continue;
		const t = ((c[0] - a[0]) * ey - (c[1] - a[1]) * ex) / across;
		const s = ((c[0] - a[0]) * dy - (c[1] - a[1]) * dx) / across;
		if (t > 0 && t < 1 && s >= -1e-9 && s <= 1 + 1e-9) found.push(t);
	}
	return found.sort((first, second) => first - second);
}

/**
 * Whether the whole of a segment lies in an area, its edge counted, also where the area is hollow:
 * between two meetings with the edge it lies inside or outside as its middle there does.
 */
export function segmentInArea(area: readonly Ground[], a: Ground, b: Ground): boolean {
	if (!placeInArea(area, a) || !placeInArea(area, b)) return false;
	const at = meetings(area, a, b);
	for (let i = 0; i + 1 < at.length; i++) {
		const t = (at[i]! + at[i + 1]!) / 2;
		if (!placeInArea(area, [a[0] + t * (b[0] - a[0]), a[1] + t * (b[1] - a[1])])) return false;
	}
	return true;
}

/** Whether a curtain of a length stands wholly in an area. */
export function standsIn(area: readonly Ground[], placement: Placement, lengthM: number): boolean {
	const { from, to } = endsOf(placement, lengthM);
	return segmentInArea(area, from, to);
}

/** What is wrong with an area before anything is sought in it; null when nothing is. */
export function areaFault(area: readonly Ground[]): 'corners' | 'crosses' | 'empty' | null {
	if (area.length < 3 || !area.flat().every(Number.isFinite)) return 'corners';
	if (area.length > 3 && crossesItself(area)) return 'crosses';
	return polygonArea(area) > 0 ? null : 'empty';
}

/** Longest way across an area, metres: no longer curtain fits in any way. */
export function widestM(area: readonly Ground[]): number {
	let widest = 0;
	for (const a of area) {
		for (const b of area) widest = Math.max(widest, Math.hypot(a[0] - b[0], a[1] - b[1]));
	}
	return widest;
}

/** Whether visitors of a zone stand in an area: somewhere on the lattice of their places. */
export function coversZone(area: readonly Ground[], outline: readonly Ground[]): boolean {
	return latticePlaces(outline).some(({ x, y }) => placeInArea(area, [x, y]));
}
