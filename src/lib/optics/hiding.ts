import type { Rings } from './rings';
import { cornersOf, planeDistance, PLANE_TOLERANCE_M } from './sheet';
import type { Curtain, Eye, Sheet } from './site';
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
 * Keeps of a set the directions in which a wall stands before a curtain, seen from an eye in neither
 * plane: within the wall's four edges, and nearer than the curtain,
 * delta_curtain (m_wall . d) > delta_wall (m_curtain . d).
 *
 * @param set n intervals of the ring of curtain c
 * @param slack how far the sun may be away, radians: above 0 keeps only what no such sun takes away,
 * below 0 all that any such sun would keep
 * @returns the new number of intervals
 */
export function keepHidden(
	set: Float64Array,
	n: number,
	rings: Rings,
	c: number,
	curtain: Curtain,
	wall: Sheet,
	eye: Eye,
	slack: number
): number {
	const wallOffset = wall.acrossX * (wall.x - eye.x) + wall.acrossY * (wall.y - eye.y);
	const away = Math.abs(wallOffset);
	const mx = wallOffset < 0 ? -wall.acrossX : wall.acrossX;
	const my = wallOffset < 0 ? -wall.acrossY : wall.acrossY;
	const left = wall.alongX * (eye.x - wall.x) + wall.alongY * (eye.y - wall.y);
	const right = wall.widthM - left;
	const aside = away * wall.alongX;
	const asideY = away * wall.alongY;
	// m and along are at right angles and of length 1, so |left m + away along| is the root of squares.
	const away2 = away * away;
	let room = slack === 0 ? 0 : -slack * Math.sqrt(left * left + away2);
	let kept = rings.keep(set, n, c, left * mx + aside, left * my + asideY, 0, room);
	if (kept === 0) return 0;
	if (slack !== 0) room = -slack * Math.sqrt(right * right + away2);
	kept = rings.keep(set, kept, c, right * mx - aside, right * my - asideY, 0, room);
	if (kept === 0) return 0;
	const above = wall.topM - eye.z;
	if (slack !== 0) room = -slack * Math.sqrt(above * above + away2);
	kept = rings.keep(set, kept, c, above * mx, above * my, -away, room);
	if (kept === 0) return 0;
	const below = eye.z - wall.bottomM;
	if (slack !== 0) room = -slack * Math.sqrt(below * below + away2);
	kept = rings.keep(set, kept, c, below * mx, below * my, away, room);
	if (kept === 0) return 0;
	const offset = curtain.acrossX * (curtain.x - eye.x) + curtain.acrossY * (curtain.y - eye.y);
	const curtainAway = Math.abs(offset);
	const nearer = offset < 0 ? -away : away;
	const gx = curtainAway * mx - nearer * curtain.acrossX;
	const gy = curtainAway * my - nearer * curtain.acrossY;
	if (slack !== 0) room = -slack * Math.sqrt(gx * gx + gy * gy);
	return rings.keep(set, kept, c, gx, gy, 0, room);
}
