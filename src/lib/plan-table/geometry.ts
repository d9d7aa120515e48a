import { boundingBox } from '../optics/polygon';

/** A place on the ground in the site frame: metres, [x east, y north]. */
export type Place = [number, number];

/** What curtains and walls have in common. */
export interface Ends {
	from: Place;
	to: Place;
}

/** Lengths are kept to the millimetre: turning and pulling would else fill the fields with digits. */
export const tidy = (metres: number): number => {
	const rounded = Math.round(metres * 1000) / 1000;
	return rounded === 0 ? 0 : rounded;
};

export const tidyPlace = ([x, y]: Place): Place => [tidy(x), tidy(y)];

/** Metres between two places. */
export const distanceM = (a: Place, b: Place): number => Math.hypot(b[0] - a[0], b[1] - a[1]);

/** Degrees clockwise from north, 0 to below 360, in which b lies from a; 0 when they are one. */
export function bearingDeg(a: Place, b: Place): number {
	const deg = (Math.atan2(b[0] - a[0], b[1] - a[1]) * 180) / Math.PI;
	return (deg + 360) % 360;
}

/** The place at a bearing and distance. */
export function placeAt(start: Place, bearing: number, metres: number): Place {
	const rad = (bearing * Math.PI) / 180;
	return [start[0] + metres * Math.sin(rad), start[1] + metres * Math.cos(rad)];
}

export const middleOf = ({ from, to }: Ends): Place => [
	(from[0] + to[0]) / 2,
	(from[1] + to[1]) / 2
];

/** Middle of the smallest upright rectangle around an outline; there the zone's lattice has a point. */
export function middleOfOutline(outline: readonly Place[]): Place {
	const { west, east, south, north } = boundingBox(outline);
	return [(west + east) / 2, (south + north) / 2];
}

const shifted = ([x, y]: Place, [dx, dy]: Place): Place => tidyPlace([x + dx, y + dy]);

/** The same sheet, moved. */
export const movedEnds = <T extends Ends>(sheet: T, by: Place): T => ({
	...sheet,
	from: shifted(sheet.from, by),
	to: shifted(sheet.to, by)
});

export const movedOutline = (outline: readonly Place[], by: Place): Place[] =>
	outline.map((corner) => shifted(corner, by));

/** A place turned about another, clockwise as seen from above. */
export function turned(place: Place, about: Place, clockwiseDeg: number): Place {
	const far = distanceM(about, place);
	return tidyPlace(placeAt(about, bearingDeg(about, place) + clockwiseDeg, far));
}

/** The same sheet with another bearing from `from` to `to`, turned about its middle. */
export function withBearing<T extends Ends>(sheet: T, bearing: number): T {
	const middle = middleOf(sheet);
	const half = distanceM(sheet.from, sheet.to) / 2;
	return {
		...sheet,
		from: tidyPlace(placeAt(middle, bearing + 180, half)),
		to: tidyPlace(placeAt(middle, bearing, half))
	};
}

/** The same sheet with another length: `from` stays, the bearing too. */
export function withLength<T extends Ends>(sheet: T, metres: number): T {
	const bearing = bearingDeg(sheet.from, sheet.to);
	return { ...sheet, to: tidyPlace(placeAt(sheet.from, bearing, metres)) };
}

/** An outline turned about the middle of its box. */
export function turnedOutline(outline: readonly Place[], clockwiseDeg: number): Place[] {
	const middle = middleOfOutline(outline);
	return outline.map((corner) => turned(corner, middle, clockwiseDeg));
}

/** An outline stretched so that its box has a new width and depth; the south-west corner stays. */
export function resizedOutline(outline: readonly Place[], width: number, depth: number): Place[] {
	const { west, east, south, north } = boundingBox(outline);
	const [wide, deep] = [width / (east - west || 1), depth / (north - south || 1)];
	return outline.map(([x, y]) => tidyPlace([west + (x - west) * wide, south + (y - south) * deep]));
}

/** The outline with a corner between corner `after` and the next, where wanted or half way. */
export function withCorner(outline: readonly Place[], after: number, at?: Place): Place[] {
	const from = outline[after]!;
	const to = outline[(after + 1) % outline.length]!;
	return outline.toSpliced(after + 1, 0, tidyPlace(at ?? middleOf({ from, to })));
}

/** The outline without a corner, or as it was when only three are left. */
export const withoutCorner = (outline: readonly Place[], corner: number): Place[] =>
	outline.length <= 3 ? [...outline] : outline.toSpliced(corner, 1);

/** Farther than this a shadow is not drawn: it has left every drawing. Metres. */
const FARTHEST_SHADOW_M = 2000;

/**
 * The shadow that an upright sheet throws on level ground: its lower and its upper edge, carried away
 * from the sun by height over the tangent of the sun's altitude.
 * @param groundM height of that ground, metres above datum
 * @returns four corners; null when the sun is not up or the sheet ends below the ground
 */
export function shadowOf(
	sheet: Ends & { bottom: number; top: number },
	sun: { azimuthDeg: number; altitudeDeg: number },
	groundM = 0
): Place[] | null {
	if (!(sun.altitudeDeg > 0) || sheet.top <= groundM) return null;
	const perMetre = 1 / Math.tan((sun.altitudeDeg * Math.PI) / 180);
	const cast = (place: Place, heightM: number) =>
		placeAt(
			place,
			sun.azimuthDeg + 180,
			Math.min(FARTHEST_SHADOW_M, Math.max(0, heightM - groundM) * perMetre)
		);
	return [
		cast(sheet.from, sheet.bottom),
		cast(sheet.to, sheet.bottom),
		cast(sheet.to, sheet.top),
		cast(sheet.from, sheet.top)
	];
}
