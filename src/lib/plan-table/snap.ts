import { bearingDeg, distanceM, placeAt, tidyPlace, type Place } from './geometry';

/** What a dragged place keeps to. */
export interface Snap {
	/** Whole multiples of this many metres; null: free. */
	stepM: number | null;
	/** Right angles and straight lines with what stands near. */
	rightAngles: boolean;
}

/** From here a line would make a right angle, or go on straight, at any of these bearings. */
export interface Anchor {
	at: Place;
	bearingsDeg: readonly number[];
}

/** A line this near to a right angle is drawn to it, degrees. */
export const RIGHT_ANGLE_REACH_DEG = 4;

/** A bearing and its three others at right angles. */
export const quarters = (bearing: number): number[] =>
	[0, 90, 180, 270].map((turn) => (((bearing + turn) % 360) + 360) % 360);

/** Smallest angle between two bearings, 0 to 180 degrees. */
export function angleBetweenDeg(a: number, b: number): number {
	const apart = Math.abs((((a - b) % 360) + 360) % 360);
	return Math.min(apart, 360 - apart);
}

/** The bearing among some that is nearest to one, if it is near enough. */
export function nearBearing(
	bearing: number,
	among: readonly number[],
	reachDeg = RIGHT_ANGLE_REACH_DEG
): number | null {
	let best: number | null = null;
	let least = reachDeg;
	for (const one of among) {
		const apart = angleBetweenDeg(bearing, one);
		if (apart < least) [best, least] = [one, apart];
	}
	return best;
}

export const toStep = (value: number, step: number): number => Math.round(value / step) * step;

/** Where the line through a at one bearing meets the line through b at another. */
function crossing(a: Place, aDeg: number, b: Place, bDeg: number): Place | null {
	const [ax, ay] = placeAt([0, 0], aDeg, 1);
	const [bx, by] = placeAt([0, 0], bDeg, 1);
	const across = ax * by - ay * bx;
	if (Math.abs(across) < 1e-6) return null;
	const t = ((b[0] - a[0]) * by - (b[1] - a[1]) * bx) / across;
	return [a[0] + t * ax, a[1] + t * ay];
}

/**
 * Where a place goes that is being dragged. A right angle at one anchor comes first, with the length
 * in whole steps; right angles at two meet in one place; else the place goes to the metre grid.
 */
export function snapPlace(place: Place, snap: Snap, anchors: readonly Anchor[] = []): Place {
	const held = snap.rightAngles
		? anchors.flatMap(({ at, bearingsDeg }) => {
				const near = nearBearing(bearingDeg(at, place), bearingsDeg);
				return near === null || distanceM(at, place) < 1e-6 ? [] : [{ at, near }];
			})
		: [];
	const [first, second] = held;
	if (first && second) {
		const meet = crossing(first.at, first.near, second.at, second.near);
		if (meet) return tidyPlace(meet);
	}
	if (first) {
		const along = distanceM(first.at, place) * Math.cos(offRad(first, place));
		const metres = snap.stepM ? Math.max(snap.stepM, toStep(along, snap.stepM)) : along;
		return tidyPlace(placeAt(first.at, first.near, metres));
	}
	if (!snap.stepM) return tidyPlace(place);
	return tidyPlace([toStep(place[0], snap.stepM), toStep(place[1], snap.stepM)]);
}

const offRad = (held: { at: Place; near: number }, place: Place): number =>
	(angleBetweenDeg(bearingDeg(held.at, place), held.near) * Math.PI) / 180;

/** A bearing that is being turned: to right angles when near, else to whole steps of 5 degrees. */
export function snapBearing(bearing: number, snap: Snap, among: readonly number[]): number {
	const near = snap.rightAngles ? nearBearing(bearing, among) : null;
	if (near !== null) return near;
	return snap.stepM === null ? bearing : (toStep(bearing, 5) + 360) % 360;
}
