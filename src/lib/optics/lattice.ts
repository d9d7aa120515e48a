import {
	boundingBox,
	crossingsAt,
	distanceToOutline,
	OUTLINE_TOLERANCE_M,
	polygonArea,
	type Corner
} from './polygon';

/** How many lattice squares have together the area of the outline. */
const SQUARES = 64;

/** The spacing is halved until at least this many points fall inside. */
const LEAST_POINTS = 16;

/**
 * Greatest number of lattice spacings that an outline may be long or wide. Beyond it (a strip of a
 * millimetre over a hundred metres) nobody can stand there, and the lattice would have no end.
 */
export const MOST_SPACINGS = 20_000;

/** Lattice spacing in metres that an outline starts with. */
export function latticeSpacing(outline: readonly Corner[]): number {
	return Math.sqrt(polygonArea(outline) / SQUARES);
}

/** Length or width of the outline, whichever is more, in spacings of its lattice. */
export function spacingsAcross(outline: readonly Corner[]): number {
	const { west, east, south, north } = boundingBox(outline);
	return Math.max(east - west, north - south) / latticeSpacing(outline);
}

/**
 * Places of the eyes of a zone: a square lattice along x and y of spacing sqrt(area / 64), one point
 * at the centre of the outline's bounding box, those inside by the even-odd rule and further than
 * 1e-9 m from the outline. Fewer than 16: the spacing is halved until there are at least 16.
 *
 * Rows are walked between the outline's crossings, so a long thin outline costs its points and not its
 * bounding box.
 *
 * @param outline corners of a simple polygon, metres
 * @returns places south to north, each row west to east
 * @throws RangeError when the outline has no area, or is too thin to stand in
 */
export function latticePlaces(outline: readonly Corner[]): { x: number; y: number }[] {
	const start = latticeSpacing(outline);
	if (!(start > 0) || !(spacingsAcross(outline) <= MOST_SPACINGS)) {
		throw new RangeError('outline must enclose an area to stand in');
	}
	for (let spacing = start; ; spacing /= 2) {
		const places = placesAt(outline, spacing);
		if (places.length >= LEAST_POINTS) return places;
	}
}

function placesAt(outline: readonly Corner[], spacing: number): { x: number; y: number }[] {
	const { west, east, south, north } = boundingBox(outline);
	const centreX = (west + east) / 2;
	const centreY = (south + north) / 2;
	const places: { x: number; y: number }[] = [];
	const rows = Math.ceil((north - south) / 2 / spacing);
	for (let row = -rows; row <= rows; row++) {
		const y = centreY + row * spacing;
		const crossings = crossingsAt(outline, y);
		for (let i = 0; i + 1 < crossings.length; i += 2) {
			const first = Math.ceil((crossings[i]! - centreX) / spacing);
			const last = Math.floor((crossings[i + 1]! - centreX) / spacing);
			for (let column = first; column <= last; column++) {
				const x = centreX + column * spacing;
				if (distanceToOutline(outline, [x, y]) > OUTLINE_TOLERANCE_M) places.push({ x, y });
			}
		}
	}
	return places;
}
