import { RAD_PER_DEG } from './angles';
import { sunVector, type SunPosition } from './sun';
import type { Vector } from './vector';

/** Right-handed frame about the antisolar direction, for directions on a ring around it. */
export interface RingFrame {
	/** Towards the sun. */
	readonly sun: Vector;
	/** Antisolar direction, the ring's axis. */
	readonly axis: Vector;
	/** Top of the ring: up with its axis part removed, normalised. phi = 0. */
	readonly up: Vector;
	/** axis x up, level, to the viewer's right. phi = 90 degrees. */
	readonly right: Vector;
}

/**
 * The frame of the ring for a sun position. In terms of altitude h and azimuth A, `up` comes out as
 * (-sin h sin A, -sin h cos A, cos h) and `right` as (-cos A, sin A, 0), with no division, so a sun
 * straight overhead has a frame too: the one that its azimuth names.
 * @throws RangeError when the position is out of range
 */
export function ringFrame(position: SunPosition): RingFrame {
	const sun = sunVector(position);
	const azimuth = position.azimuthDeg * RAD_PER_DEG;
	const sinA = Math.sin(azimuth);
	const cosA = Math.cos(azimuth);
	const level = Math.cos(position.altitudeDeg * RAD_PER_DEG);
	return {
		sun,
		axis: { x: -sun.x, y: -sun.y, z: -sun.z },
		up: { x: -sun.z * sinA, y: -sun.z * cosA, z: level },
		right: { x: -cosA, y: sinA, z: 0 }
	};
}

/**
 * Direction phi of the ring: axis cos rho + (up cos phi + right sin phi) sin rho.
 * @param frame the ring's frame
 * @param radiusDeg angle rho from the antisolar direction
 * @param phiDeg place on the ring, 0 at its top, growing to the viewer's right
 */
export function ringDirection({
	frame,
	radiusDeg,
	phiDeg
}: {
	frame: RingFrame;
	radiusDeg: number;
	phiDeg: number;
}): Vector {
	const along = Math.cos(radiusDeg * RAD_PER_DEG);
	const across = Math.sin(radiusDeg * RAD_PER_DEG);
	const u = across * Math.cos(phiDeg * RAD_PER_DEG);
	const v = across * Math.sin(phiDeg * RAD_PER_DEG);
	const { axis, up, right } = frame;
	return {
		x: axis.x * along + up.x * u + right.x * v,
		y: axis.y * along + up.y * u + right.y * v,
		z: axis.z * along + up.z * u + right.z * v
	};
}
