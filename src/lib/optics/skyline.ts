import { DEG_PER_RAD, requireWithin } from './angles';
import { createHorizon } from './horizon';

/** Corners of a skyline: [azimuth, altitude] in degrees, azimuths strictly ascending in [0, 360). */
export type SkylineCorners = [number, number][];

/** How far beside a building its upright edge is put, degrees. */
const EDGE_DEG = 0.01;

/** Most corners that a skyline has. */
const MOST_CORNERS = 3600;

/**
 * Altitude at which the top of a building stands, seen from an eye.
 * @param heightM of the top above the ground, metres, 0 or more
 * @param eyeM of the eye above the same ground, 0 or more
 * @param distanceM along the ground, above 0
 * @returns degrees, -90 to 90
 * @throws RangeError outside those ranges
 */
export function buildingAltitudeDeg({
	heightM,
	eyeM,
	distanceM
}: {
	heightM: number;
	eyeM: number;
	distanceM: number;
}): number {
	requireWithin('heightM', heightM, { least: 0, greatest: 10_000 });
	requireWithin('eyeM', eyeM, { least: 0, greatest: 10_000 });
	requireWithin('distanceM', distanceM, { least: 1e-3, greatest: 1e6 });
	return Math.atan2(heightM - eyeM, distanceM) * DEG_PER_RAD;
}

/**
 * A skyline with a flat-topped building in front of it: at each azimuth the higher of the two. Its edges
 * are upright, a hundredth of a degree wide.
 * @param fromAzimuthDeg left edge, @param toAzimuthDeg right edge, clockwise from it, 0 to below 360; over
 *   north where `to` is below `from`
 * @throws RangeError when an angle is out of range or the skyline would have too many corners
 */
export function withBuilding(
	skyline: readonly (readonly [number, number])[],
	{
		fromAzimuthDeg,
		toAzimuthDeg,
		altitudeDeg
	}: { fromAzimuthDeg: number; toAzimuthDeg: number; altitudeDeg: number }
): SkylineCorners {
	requireWithin('fromAzimuthDeg', fromAzimuthDeg, { least: 0, greatest: 360 });
	requireWithin('toAzimuthDeg', toAzimuthDeg, { least: 0, greatest: 360 });
	requireWithin('altitudeDeg', altitudeDeg, { least: -90, greatest: 90 });
	const horizon = createHorizon(skyline);
	const turn = (azimuthDeg: number) => ((azimuthDeg % 360) + 360) % 360;
	const widthDeg = turn(toAzimuthDeg - fromAzimuthDeg);
	const within = (azimuthDeg: number) => turn(azimuthDeg - fromAzimuthDeg) <= widthDeg;
	const corners = new Map<number, number>();
	// Rounded, so that an edge put twice is one corner.
	const put = (azimuthDeg: number, altitude: number) =>
		corners.set(Math.round(turn(azimuthDeg) * 1e6) / 1e6, Math.round(altitude * 1e6) / 1e6);
	const top = (azimuthDeg: number) => Math.max(altitudeDeg, horizon.altitudeDegAt(azimuthDeg));
	for (const [azimuth, altitude] of skyline) {
		put(azimuth, within(azimuth) ? top(azimuth) : altitude);
	}
	for (const crossing of crossings(skyline, altitudeDeg)) {
		if (within(crossing)) put(crossing, altitudeDeg);
	}
	put(fromAzimuthDeg - EDGE_DEG, horizon.altitudeDegAt(fromAzimuthDeg - EDGE_DEG));
	put(fromAzimuthDeg, top(fromAzimuthDeg));
	put(toAzimuthDeg, top(toAzimuthDeg));
	put(toAzimuthDeg + EDGE_DEG, horizon.altitudeDegAt(toAzimuthDeg + EDGE_DEG));
	if (corners.size > MOST_CORNERS) throw new RangeError('the skyline has too many corners');
	return [...corners].sort(([a], [b]) => a - b).filter(([azimuth]) => azimuth < 360);
}

/** Azimuths at which a skyline crosses an altitude. */
function crossings(skyline: readonly (readonly [number, number])[], altitudeDeg: number): number[] {
	return skyline.flatMap(([azimuth, altitude], i) => {
		const after = skyline[(i + 1) % skyline.length]!;
		const end = after[0] + (i + 1 < skyline.length ? 0 : 360);
		const rise = after[1] - altitude;
		const part = rise === 0 ? NaN : (altitudeDeg - altitude) / rise;
		return part > 0 && part < 1 ? [azimuth + part * (end - azimuth)] : [];
	});
}
