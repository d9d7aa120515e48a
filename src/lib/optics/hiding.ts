import type { Rings } from './rings';
import { EYE_X, EYE_Y, EYE_Z, TO_CURTAIN_X, TO_CURTAIN_Y, WALL_STRIDE } from './sight-numbers';
import { cornersOf, planeDistance, PLANE_TOLERANCE_M } from './sheet';
import type { Eye, Sheet } from './site';
import type { Vector } from './vector';

/** A wall's part in what an eye sees of a curtain, whatever the sun. */
export const NEVER_HIDES = 0;
export const MAY_HIDE = 1;
export const HIDES_ALL = 2;

/** Whether all corners of `other` lie outside one edge of the cone in which an eye sees a sheet. */
function outsideCone(eye: Eye, sheet: Sheet, other: readonly Vector[]): boolean {
	const offset = planeDistance(sheet, eye.x, eye.y);
	const away = Math.abs(offset);
	const mx = offset > 0 ? -sheet.acrossX : sheet.acrossX;
	const my = offset > 0 ? -sheet.acrossY : sheet.acrossY;
	const left = sheet.alongX * (eye.x - sheet.x) + sheet.alongY * (eye.y - sheet.y);
	let outLeft = true;
	let outRight = true;
	let outBelow = true;
	let outAbove = true;
	for (const { x, y, z } of other) {
		const ahead = mx * (x - eye.x) + my * (y - eye.y);
		const along = sheet.alongX * (x - eye.x) + sheet.alongY * (y - eye.y);
		const up = z - eye.z;
		outLeft &&= left * ahead + away * along < 0;
		outRight &&= (sheet.widthM - left) * ahead - away * along < 0;
		outBelow &&= (eye.z - sheet.bottomM) * ahead + away * up < 0;
		outAbove &&= (sheet.topM - eye.z) * ahead - away * up < 0;
	}
	return outLeft || outRight || outBelow || outAbove;
}

/** Whether a wall can stand between an eye and any point of a curtain. */
export function hidingOf({
	eye,
	curtain,
	wall
}: {
	eye: Eye;
	curtain: Sheet;
	wall: Sheet;
}): typeof NEVER_HIDES | typeof MAY_HIDE | typeof HIDES_ALL {
	if (Math.abs(planeDistance(wall, eye.x, eye.y)) < PLANE_TOLERANCE_M) {
		// Rays within the wall's plane have no width; only an eye on the wall itself is stopped.
		const along = wall.alongX * (eye.x - wall.x) + wall.alongY * (eye.y - wall.y);
		const on = along >= 0 && along <= wall.widthM && eye.z >= wall.bottomM && eye.z <= wall.topM;
		return on ? HIDES_ALL : NEVER_HIDES;
	}
	const curtainOffset = planeDistance(curtain, eye.x, eye.y);
	const wallCorners = cornersOf(wall);
	const beyond = wallCorners.every(
		({ x, y }) => planeDistance(curtain, x, y) * Math.sign(curtainOffset) <= 0
	);
	if (beyond) return NEVER_HIDES;
	if (outsideCone(eye, curtain, wallCorners)) return NEVER_HIDES;
	if (outsideCone(eye, wall, cornersOf(curtain))) return NEVER_HIDES;
	return MAY_HIDE;
}

/**
 * Sets the conditions under which a wall stands before a curtain, seen from an eye in neither plane:
 * within the wall's four edges, and nearer than the curtain,
 * delta_curtain (m_wall . d) > delta_wall (m_curtain . d).
 *
 * @param rings receives the conditions on the ring of curtain c
 * @param walls numbers of all walls (see wallNumbers), @param w which wall
 * @param views numbers of all eyes and curtains (see Sight), @param view where those of this pair begin
 * @param slack how far the sun may be away, radians: above 0 leaves only what is hidden from all such
 * suns, below 0 what is hidden from any
 * @returns the number of conditions
 */
export function setHiding(
	rings: Rings,
	c: number,
	walls: Float64Array,
	w: number,
	views: Float64Array,
	view: number,
	slack: number
): number {
	const at = w * WALL_STRIDE;
	const alongX = walls[at + 2]!;
	const alongY = walls[at + 3]!;
	const toWallX = walls[at]! - views[view + EYE_X]!;
	const toWallY = walls[at + 1]! - views[view + EYE_Y]!;
	const wallOffset = alongX * toWallY - alongY * toWallX;
	const away = wallOffset < 0 ? -wallOffset : wallOffset;
	const mx = wallOffset < 0 ? alongY : -alongY;
	const my = wallOffset < 0 ? -alongX : alongX;
	const left = -(alongX * toWallX + alongY * toWallY);
	const right = walls[at + 4]! - left;
	const below = views[view + EYE_Z]! - walls[at + 5]!;
	const above = walls[at + 6]! - views[view + EYE_Z]!;
	const asideX = away * alongX;
	const asideY = away * alongY;
	const curtainAway = views[view]!;
	const gx = curtainAway * mx - away * views[view + TO_CURTAIN_X]!;
	const gy = curtainAway * my - away * views[view + TO_CURTAIN_Y]!;
	let [roomLeft, roomRight, roomBelow, roomAbove, roomNearer] = [0, 0, 0, 0, 0];
	if (slack !== 0) {
		// m and along are at right angles and of length 1, so |left m + away along| is the root of squares.
		const away2 = away * away;
		roomLeft = -slack * Math.sqrt(left * left + away2);
		roomRight = -slack * Math.sqrt(right * right + away2);
		roomBelow = -slack * Math.sqrt(below * below + away2);
		roomAbove = -slack * Math.sqrt(above * above + away2);
		roomNearer = -slack * Math.sqrt(gx * gx + gy * gy);
	}
	rings.require(0, c, left * mx + asideX, left * my + asideY, 0, roomLeft);
	rings.require(1, c, right * mx - asideX, right * my - asideY, 0, roomRight);
	rings.require(2, c, above * mx, above * my, -away, roomAbove);
	rings.require(3, c, below * mx, below * my, away, roomBelow);
	rings.require(4, c, gx, gy, 0, roomNearer);
	return 5;
}
