import { getPosition } from 'suncalc';
import { DEG_PER_RAD, RAD_PER_DEG, requireWithin } from './angles';
import type { Vector } from './vector';

/** Where the sun's centre stands. */
export interface SunPosition {
	/** Degrees clockwise from true north, 0 to 360. */
	readonly azimuthDeg: number;
	/** Degrees above the level horizon, corrected for standard refraction. */
	readonly altitudeDeg: number;
}

/** The greatest instant that a Date can carry, milliseconds since 1970. */
const LAST_INSTANT_MS = 8.64e15;

/**
 * The fastest that the apparent sun moves against the ground, radians a second. The hour angle grows
 * by at most 360.13 degrees in a day of 86,400 s (360.9856 of the stars less at least 0.89 of the
 * sun's right ascension, Meeus, "Astronomical Algorithms", ch. 12 and 25), the declination changes by
 * at most 0.41 degrees a day, and above the horizon refraction draws altitudes together, never apart.
 * The true bound is 7.28e-5; the one used leaves 1.5 per cent to spare.
 */
export const FASTEST_SUN_RAD_PER_S = 7.39e-5;

/**
 * The sun's apparent azimuth and altitude, by suncalc 2 (Meeus, "Astronomical Algorithms", ch. 16 and
 * 25), which takes any number in silence; this module does not.
 *
 * @param instantMs milliseconds since 1970 UTC
 * @param latitudeDeg -90 to 90, north positive
 * @param longitudeDeg -180 to 180, east positive
 * @throws RangeError when an argument is outside its range, NaN or infinite
 */
export function sunPosition({
	instantMs,
	latitudeDeg,
	longitudeDeg
}: {
	instantMs: number;
	latitudeDeg: number;
	longitudeDeg: number;
}): SunPosition {
	requireWithin('instantMs', instantMs, { least: -LAST_INSTANT_MS, greatest: LAST_INSTANT_MS });
	requireWithin('latitudeDeg', latitudeDeg, { least: -90, greatest: 90 });
	requireWithin('longitudeDeg', longitudeDeg, { least: -180, greatest: 180 });
	const { azimuth, altitude } = getPosition(new Date(instantMs), latitudeDeg, longitudeDeg);
	return { azimuthDeg: azimuth, altitudeDeg: altitude };
}

/**
 * Unit vector from the site to the sun: (cos h sin A, cos h cos A, sin h).
 * @throws RangeError when the altitude is not from -90 to 90 or the azimuth is not finite
 */
export function sunVector({ azimuthDeg, altitudeDeg }: SunPosition): Vector {
	requireWithin('altitudeDeg', altitudeDeg, { least: -90, greatest: 90 });
	requireWithin('azimuthDeg', azimuthDeg, { least: -1e6, greatest: 1e6 });
	const azimuth = azimuthDeg * RAD_PER_DEG;
	const altitude = altitudeDeg * RAD_PER_DEG;
	const level = Math.cos(altitude);
	return { x: level * Math.sin(azimuth), y: level * Math.cos(azimuth), z: Math.sin(altitude) };
}

/** The position a unit vector points to; azimuth 0 for a vector that is straight up or down. */
export function positionOfVector({ x, y, z }: Vector): SunPosition {
	const azimuthDeg = Math.atan2(x, y) * DEG_PER_RAD;
	return {
		azimuthDeg: azimuthDeg < 0 ? azimuthDeg + 360 : azimuthDeg,
		altitudeDeg: Math.atan2(z, Math.hypot(x, y)) * DEG_PER_RAD
	};
}

/**
 * The sun over one place: the ranges are checked once, so that the search for windows pays nothing
 * beyond suncalc itself.
 * @returns the position at an instant, milliseconds since 1970 UTC; a finite instant is expected
 * @throws RangeError when latitude or longitude is outside its range
 */
export function sunTracker({
	latitudeDeg,
	longitudeDeg
}: {
	latitudeDeg: number;
	longitudeDeg: number;
}): (instantMs: number) => SunPosition {
	requireWithin('latitudeDeg', latitudeDeg, { least: -90, greatest: 90 });
	requireWithin('longitudeDeg', longitudeDeg, { least: -180, greatest: 180 });
	return (instantMs) => {
		const { azimuth, altitude } = getPosition(new Date(instantMs), latitudeDeg, longitudeDeg);
		return { azimuthDeg: azimuth, altitudeDeg: altitude };
	};
}
