/** A corner of an outline: metres, [x, y]. */
export type Corner = readonly [number, number];

/** A point nearer than this to an outline, metres, does not count as inside it. */
export const OUTLINE_TOLERANCE_M = 1e-9;

/** Enclosed area in square metres, whatever the sense of rotation. */
export function polygonArea(outline: readonly Corner[]): number {
	let twice = 0;
	const [originX, originY] = outline[0] ?? [0, 0];
	for (let i = 0; i < outline.length; i++) {
		const a = outline[i]!;
		const b = outline[(i + 1) % outline.length]!;
		// About the first corner: an outline far from the datum loses no digits.
		twice += (a[0] - originX) * (b[1] - originY) - (b[0] - originX) * (a[1] - originY);
	}
	return Math.abs(twice) / 2;
}

/** Smallest upright rectangle around an outline of at least one corner. */
export function boundingBox(outline: readonly Corner[]): {
	west: number;
	east: number;
	south: number;
	north: number;
} {
	let [west, south] = outline[0] ?? [0, 0];
	let [east, north] = [west, south];
	for (const [x, y] of outline) {
		west = Math.min(west, x);
		east = Math.max(east, x);
		south = Math.min(south, y);
		north = Math.max(north, y);
	}
	return { west, east, south, north };
}

/** Distance in metres from a point to the nearest point of an outline. */
export function distanceToOutline(outline: readonly Corner[], [x, y]: Corner): number {
	let least = Infinity;
	for (let i = 0; i < outline.length; i++) {
		const a = outline[i]!;
		const b = outline[(i + 1) % outline.length]!;
		const dx = b[0] - a[0];
		const dy = b[1] - a[1];
		const square = dx * dx + dy * dy;
		const along = square > 0 ? ((x - a[0]) * dx + (y - a[1]) * dy) / square : 0;
		const t = Math.min(1, Math.max(0, along));
		least = Math.min(least, Math.hypot(x - a[0] - t * dx, y - a[1] - t * dy));
	}
	return least;
}

/** Where the level line through `y` crosses the outline, x ascending, by the even-odd rule. */
export function crossingsAt(outline: readonly Corner[], y: number): number[] {
	const crossings: number[] = [];
	for (let i = 0; i < outline.length; i++) {
		const a = outline[i]!;
		const b = outline[(i + 1) % outline.length]!;
		// Half-open: a corner on the line is met once by the two edges that share it, or not at all.
		if (a[1] > y !== b[1] > y) {
			crossings.push(a[0] + ((y - a[1]) / (b[1] - a[1])) * (b[0] - a[0]));
		}
	}
	return crossings.sort((a, b) => a - b);
}

/** Which side of the line a-b the point c lies on: positive left, negative right, 0 on it. */
function side(a: Corner, b: Corner, c: Corner): number {
	return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]);
}

/** Whether c, known to be on the line a-b, lies between a and b. */
function between(a: Corner, b: Corner, c: Corner): boolean {
	return (
		Math.min(a[0], b[0]) <= c[0] &&
		c[0] <= Math.max(a[0], b[0]) &&
		Math.min(a[1], b[1]) <= c[1] &&
		c[1] <= Math.max(a[1], b[1])
	);
}

function segmentsMeet(a: Corner, b: Corner, c: Corner, d: Corner): boolean {
	const abc = side(a, b, c);
	const abd = side(a, b, d);
	const cda = side(c, d, a);
	const cdb = side(c, d, b);
	if (
		((abc > 0 && abd < 0) || (abc < 0 && abd > 0)) &&
		((cda > 0 && cdb < 0) || (cda < 0 && cdb > 0))
	)
		return true;
	return (
		(abc === 0 && between(a, b, c)) ||
		(abd === 0 && between(a, b, d)) ||
		(cda === 0 && between(c, d, a)) ||
		(cdb === 0 && between(c, d, b))
	);
}

/**
 * Whether an outline crosses or touches itself. A corner given twice in a row (as when the first is
 * repeated to close the outline) is no crossing.
 */
export function crossesItself(outline: readonly Corner[]): boolean {
	const corners = outline.filter((corner, i) => {
		const next = outline[(i + 1) % outline.length]!;
		return corner[0] !== next[0] || corner[1] !== next[1];
	});
	const n = corners.length;
	for (let i = 0; i < n; i++) {
		const a = corners[i]!;
		const b = corners[(i + 1) % n]!;
		const c = corners[(i + 2) % n]!;
		// Neighbours share a corner; they cross only by turning straight back.
		if (n > 2 && side(a, b, c) === 0) {
			const back = (b[0] - a[0]) * (c[0] - b[0]) + (b[1] - a[1]) * (c[1] - b[1]);
			if (back < 0) return true;
		}
		for (let j = i + 2; j < n; j++) {
			if (i === 0 && j === n - 1) continue;
			if (segmentsMeet(a, b, corners[j]!, corners[(j + 1) % n]!)) return true;
		}
	}
	return false;
}
