import type { Rings } from './rings';
import { EYE_X, EYE_Y, EYE_Z, TO_CURTAIN_X, TO_CURTAIN_Y, WALL_STRIDE } from './sight-numbers';
import { planeDistance } from './sheet';
import type { Sheet } from './site';
import type { Vector } from './vector';

/** A wall this near to edge-on to the sun (sine of the angle) casts no shadow of any width. */
const EDGE_ON = 1e-12;

/**
 * Whether a wall's shadow can fall on a curtain for a sun within reach: no, when all four corners of
 * the curtain lie outside one side of the shadow.
 * @param corners of the curtain
 */
export function mayShade(
	wall: Sheet,
	corners: readonly Vector[],
	sun: Vector,
	reachRad: number
): boolean {
	const toSun = wall.acrossX * sun.x + wall.acrossY * sun.y;
	const facing = Math.abs(toSun);
	const certainSide = facing > reachRad;
	if (reachRad === 0 && facing < EDGE_ON) return false;
	const sunSide = toSun < 0 ? -1 : 1;
	const half = wall.widthM / 2;
	const middleX = wall.x + wall.alongX * half;
	const middleY = wall.y + wall.alongY * half;
	let outLeft = true;
	let outRight = true;
	let outSun = certainSide;
	let outBelow = certainSide;
	let outAbove = certainSide;
	for (let i = 0; i < corners.length; i++) {
		const { x, y, z } = corners[i]!;
		const dx = x - middleX;
		const dy = y - middleY;
		const across = -sun.y * dx + sun.x * dy;
		const turning = reachRad * (Math.sqrt(dx * dx + dy * dy) + half);
		const ahead = -sunSide * planeDistance(wall, x, y);
		const climbing = reachRad * (Math.abs(ahead) + Math.abs(z - wall.bottomM));
		const falling = reachRad * (Math.abs(ahead) + Math.abs(wall.topM - z));
		outLeft &&= half * facing - across + turning < 0;
		outRight &&= half * facing + across + turning < 0;
		outSun &&= ahead < 0;
		outBelow &&= facing * (z - wall.bottomM) + ahead * sun.z + climbing < 0;
		outAbove &&= facing * (wall.topM - z) - ahead * sun.z + falling < 0;
	}
	return !(outLeft || outRight || outSun || outBelow || outAbove);
}

/**
 * Sets the conditions under which a curtain lies in a wall's shadow, seen from an eye.
 *
 * P = E + t d lies in the shadow when it lies between the two upright planes through the wall's ends
 * along the sun's direction, between the planes through its upper and lower edge along the sun's
 * direction, and on the shaded side of the wall. Each is linear in P, and P is linear in d once its
 * denominator m . d > 0 is multiplied out.
 *
 * @param rings receives the conditions on the ring of curtain c, and knows the sun
 * @param walls numbers of all walls (see wallNumbers), @param w which wall
 * @param views numbers of all eyes and curtains (see Sight), @param view where those of this pair begin
 * @param slack how far the sun may be away, radians: above 0 leaves only what is shaded from all such
 * suns, below 0 what is shaded from any. Here the vectors g turn with the sun as well, by at most
 * `turning` (or `climbing`) for a radian, which is added to the length of g.
 * @returns the number of conditions; -1 when nothing is shaded
 */
export function setShading(
	rings: Rings,
	c: number,
	walls: Float64Array,
	w: number,
	views: Float64Array,
	view: number,
	slack: number
): number {
	const at = w * WALL_STRIDE;
	const sunX = rings.sun[0]!;
	const sunY = rings.sun[1]!;
	const sunZ = rings.sun[2]!;
	const alongX = walls[at + 2]!;
	const alongY = walls[at + 3]!;
	const toSun = alongX * sunY - alongY * sunX;
	const facing = toSun < 0 ? -toSun : toSun;
	const reach = slack < 0 ? -slack : slack;
	// For the eye (slack above 0) a shadow that may vanish is none.
	if (slack > 0 ? facing <= reach : facing + reach < EDGE_ON) return -1;
	const away = views[view]!;
	const mx = views[view + TO_CURTAIN_X]!;
	const my = views[view + TO_CURTAIN_Y]!;
	const half = walls[at + 4]! / 2;
	const fromX = views[view + EYE_X]! - walls[at]!;
	const fromY = views[view + EYE_Y]! - walls[at + 1]!;
	const fromMiddleX = fromX - alongX * half;
	const fromMiddleY = fromY - alongY * half;
	// Level, across the sun's direction: (-sunY, sunX).
	const across = sunX * fromMiddleY - sunY * fromMiddleX;
	const width = half * facing;
	const leftX = (width - across) * mx + away * sunY;
	const leftY = (width - across) * my - away * sunX;
	const rightX = (width + across) * mx - away * sunY;
	const rightY = (width + across) * my + away * sunX;
	let roomLeft = 0;
	let roomRight = 0;
	if (slack !== 0) {
		const fromMiddle = Math.sqrt(fromMiddleX * fromMiddleX + fromMiddleY * fromMiddleY);
		const turning = fromMiddle + away + half;
		roomLeft = -slack * (Math.sqrt(leftX * leftX + leftY * leftY) + turning);
		roomRight = -slack * (Math.sqrt(rightX * rightX + rightY * rightY) + turning);
	}
	rings.require(0, c, leftX, leftY, 0, roomLeft);
	rings.require(1, c, rightX, rightY, 0, roomRight);
	const above = walls[at + 6]! - views[view + EYE_Z]!;
	if (facing <= reach) {
		// Which side is shaded is not certain, the upper edge of any shadow is: the wall's own top.
		if (!(sunZ > reach)) return 2;
		const roomTop = -slack * Math.sqrt(above * above + away * away);
		rings.require(2, c, above * mx, above * my, -away, roomTop);
		return 3;
	}
	// Sunward: the wall's plane lies ahead of P along the sun's direction.
	const sx = toSun < 0 ? alongY : -alongY;
	const sy = toSun < 0 ? -alongX : alongX;
	const ahead = -(sx * fromX + sy * fromY);
	const aheadX = ahead * mx - away * sx;
	const aheadY = ahead * my - away * sy;
	const below = views[view + EYE_Z]! - walls[at + 5]!;
	const gz = facing * away;
	const upX = facing * above * mx - sunZ * aheadX;
	const upY = facing * above * my - sunZ * aheadY;
	const downX = facing * below * mx + sunZ * aheadX;
	const downY = facing * below * my + sunZ * aheadY;
	let roomAhead = 0;
	let roomUp = 0;
	let roomDown = 0;
	if (slack !== 0) {
		const climbing = 2 * away + Math.abs(ahead);
		roomAhead = -slack * Math.sqrt(aheadX * aheadX + aheadY * aheadY);
		roomUp = -slack * (Math.sqrt(upX * upX + upY * upY + gz * gz) + climbing + Math.abs(above));
		roomDown =
			-slack * (Math.sqrt(downX * downX + downY * downY + gz * gz) + climbing + Math.abs(below));
	}
	rings.require(2, c, aheadX, aheadY, 0, roomAhead);
	rings.require(3, c, upX, upY, -gz, roomUp);
	rings.require(4, c, downX, downY, gz, roomDown);
	return 5;
}
