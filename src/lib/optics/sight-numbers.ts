import { planeDistance, PLANE_TOLERANCE_M } from './sheet';
import type { Curtain, Eye, Sheet } from './site';

/**
 * The fixed numbers of a sight, laid out flat: objects whose fields are now whole, now broken numbers have
 * many shapes to the machine, and the innermost loops are several times slower over them.
 */

/**
 * Numbers kept for each eye and curtain:
 * - 0: the eye's distance from the curtain's plane, 0 when it stands in it;
 * - 1 to 4: its distances from the left, right, lower and upper edge along the plane, signed by the side
 *   of the plane that the eye is on;
 * - 5 to 8: the length of each edge's vector g;
 * - TO_CURTAIN_X and _Y: the level unit vector m from the eye to the plane; EYE_X, _Y and _Z.
 */
export const VIEW_STRIDE = 14;
export const TO_CURTAIN_X = 9;
export const TO_CURTAIN_Y = 10;
export const EYE_X = 11;
export const EYE_Y = 12;
export const EYE_Z = 13;

/** Fills in the numbers of one eye and curtain, from place `at`. */
export function setView(views: Float64Array, at: number, eye: Eye, curtain: Curtain): void {
	const offset = -planeDistance(curtain, eye.x, eye.y);
	const away = Math.abs(offset);
	const side = offset < 0 ? -1 : 1;
	const left = curtain.alongX * (eye.x - curtain.x) + curtain.alongY * (eye.y - curtain.y);
	const edges = [left, curtain.widthM - left, eye.z - curtain.bottomM, curtain.topM - eye.z];
	views[at] = away < PLANE_TOLERANCE_M ? 0 : away;
	edges.forEach((distance, i) => {
		views[at + 1 + i] = distance * side;
		views[at + 5 + i] = Math.hypot(distance, away);
	});
	views[at + TO_CURTAIN_X] = side * curtain.acrossX;
	views[at + TO_CURTAIN_Y] = side * curtain.acrossY;
	views[at + EYE_X] = eye.x;
	views[at + EYE_Y] = eye.y;
	views[at + EYE_Z] = eye.z;
}

/** Numbers kept for each wall: x, y, alongX, alongY, widthM, bottomM, topM. */
export const WALL_STRIDE = 7;

/** The numbers of all walls; the direction across is (-alongY, alongX). */
export function wallNumbers(walls: readonly Sheet[]): Float64Array {
	return Float64Array.from(
		walls.flatMap((wall) => [
			wall.x,
			wall.y,
			wall.alongX,
			wall.alongY,
			wall.widthM,
			wall.bottomM,
			wall.topM
		])
	);
}
