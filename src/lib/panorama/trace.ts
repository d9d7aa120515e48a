import type { SkylineCorners } from '../optics';
import type { Direction, PanoramaScale } from './geometry';

/** A place of the traced line in the picture, pixels. */
export interface TracePoint {
	xPx: number;
	yPx: number;
}

/** Places nearer than this along the picture are one, degrees. */
const LEAST_STEP_DEG = 0.02;
const hundredths = (deg: number) => Math.round(deg * 100) / 100;

/** A line that is being drawn, from left to right: a new place takes out those that it has passed back over. */
export function withTracePoint(
	points: readonly TracePoint[],
	point: TracePoint,
	leastApartPx: number
): TracePoint[] {
	return [...points.filter(({ xPx }) => Math.abs(xPx - point.xPx) >= leastApartPx), point].sort(
		(a, b) => a.xPx - b.xPx
	);
}

/** The traced line as corners, in the order of the picture; degrees to two decimals. */
export function tracedDirections(scale: PanoramaScale, points: readonly TracePoint[]): Direction[] {
	return [...points]
		.sort((a, b) => a.xPx - b.xPx)
		.map(({ xPx, yPx }) => {
			const { azimuthDeg, altitudeDeg } = scale.directionAt(xPx, yPx);
			return { azimuthDeg: hundredths(azimuthDeg) % 360, altitudeDeg: hundredths(altitudeDeg) };
		});
}

/**
 * A skyline with a traced stretch in place of what it had there. Corners outside the stretch stay.
 * @param traced clockwise, at least two; where it goes over itself, as a panorama of more than a whole
 *   turn does, the first stands
 */
export function withTraced(
	skyline: readonly (readonly [number, number])[],
	traced: readonly Direction[]
): SkylineCorners {
	const [first] = traced;
	if (!first || traced.length < 2) return skyline.map(([a, h]) => [a, h]);
	const from = first.azimuthDeg;
	const along = (azimuthDeg: number) => (((azimuthDeg - from) % 360) + 360) % 360;
	const corners: [number, number][] = [];
	let reached = -Infinity;
	for (const { azimuthDeg, altitudeDeg } of traced) {
		const at = along(azimuthDeg);
		if (at - reached < LEAST_STEP_DEG) {
			// Once round and over its own beginning.
			if (reached - at > 180) break;
			continue;
		}
		corners.push([azimuthDeg, altitudeDeg]);
		reached = at;
	}
	const outside = skyline.filter(([azimuth]) => along(azimuth) > reached);
	return [...outside.map(([a, h]): [number, number] => [a, h]), ...corners].sort(
		([a], [b]) => a - b
	);
}
