import type { Rings } from './rings';
import { planeDistance } from './sheet';
import type { Curtain, Eye, Sheet } from './site';
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
 * Keeps of a set the directions in which a curtain lies in a wall's shadow.
 *
 * P = E + t d lies in the shadow when it lies between the two upright planes through the wall's ends
 * along the sun's direction, between the planes through its upper and lower edge along the sun's
 * direction, and on the shaded side of the wall. Each is linear in P, and P is linear in d once its
 * denominator m . d > 0 is multiplied out.
 *
 * @param set n intervals of the ring of curtain c
 * @param slack how far the sun may be away, radians: above 0 keeps only what no such sun takes away,
 * below 0 all that any such sun would keep. Here the vectors g turn with the sun as well, by at most
 * `turning` (or `climbing`) for a radian, which is added to the length of g.
 * @returns the new number of intervals
 */
export function keepShaded(
	set: Float64Array,
	n: number,
	rings: Rings,
	c: number,
	curtain: Curtain,
	wall: Sheet,
	eye: Eye,
	sun: Vector,
	slack: number
): number {
	const toSun = wall.acrossX * sun.x + wall.acrossY * sun.y;
	const facing = Math.abs(toSun);
	const reach = Math.abs(slack);
	// For the eye (slack above 0) a shadow that may vanish is none.
	if (slack > 0 ? facing <= reach : facing + reach < EDGE_ON) return 0;
	const offset = curtain.acrossX * (curtain.x - eye.x) + curtain.acrossY * (curtain.y - eye.y);
	const away = Math.abs(offset);
	const mx = offset < 0 ? -curtain.acrossX : curtain.acrossX;
	const my = offset < 0 ? -curtain.acrossY : curtain.acrossY;
	const half = wall.widthM / 2;
	const fromMiddleX = eye.x - wall.x - wall.alongX * half;
	const fromMiddleY = eye.y - wall.y - wall.alongY * half;
	// Level, across the sun's direction: (-sun.y, sun.x).
	const across = sun.x * fromMiddleY - sun.y * fromMiddleX;
	const width = half * facing;
	let turning = 0;
	if (slack !== 0) {
		const fromMiddle = Math.sqrt(fromMiddleX * fromMiddleX + fromMiddleY * fromMiddleY);
		turning = fromMiddle + away + half;
	}
	let gx = (width - across) * mx + away * sun.y;
	let gy = (width - across) * my - away * sun.x;
	let room = slack === 0 ? 0 : -slack * (Math.sqrt(gx * gx + gy * gy) + turning);
	let kept = rings.keep(set, n, c, gx, gy, 0, room);
	if (kept === 0) return 0;
	gx = (width + across) * mx - away * sun.y;
	gy = (width + across) * my + away * sun.x;
	if (slack !== 0) room = -slack * (Math.sqrt(gx * gx + gy * gy) + turning);
	kept = rings.keep(set, kept, c, gx, gy, 0, room);
	if (kept === 0) return 0;
	const above = wall.topM - eye.z;
	if (facing <= reach) {
		// Which side is shaded is not certain, the upper edge of any shadow is: the wall's own top.
		if (!(sun.z > reach)) return kept;
		room = -slack * Math.sqrt(above * above + away * away);
		return rings.keep(set, kept, c, above * mx, above * my, -away, room);
	}
	// Sunward: the wall's plane lies ahead of P along the sun's direction.
	const sx = toSun < 0 ? -wall.acrossX : wall.acrossX;
	const sy = toSun < 0 ? -wall.acrossY : wall.acrossY;
	const ahead = sx * (wall.x - eye.x) + sy * (wall.y - eye.y);
	const aheadX = ahead * mx - away * sx;
	const aheadY = ahead * my - away * sy;
	if (slack !== 0) room = -slack * Math.sqrt(aheadX * aheadX + aheadY * aheadY);
	kept = rings.keep(set, kept, c, aheadX, aheadY, 0, room);
	if (kept === 0) return 0;
	const climbing = slack === 0 ? 0 : 2 * away + Math.abs(ahead);
	const gz = facing * away;
	gx = facing * above * mx - sun.z * aheadX;
	gy = facing * above * my - sun.z * aheadY;
	if (slack !== 0) {
		room = -slack * (Math.sqrt(gx * gx + gy * gy + gz * gz) + climbing + Math.abs(above));
	}
	kept = rings.keep(set, kept, c, gx, gy, -gz, room);
	if (kept === 0) return 0;
	const below = eye.z - wall.bottomM;
	gx = facing * below * mx + sun.z * aheadX;
	gy = facing * below * my + sun.z * aheadY;
	if (slack !== 0) {
		room = -slack * (Math.sqrt(gx * gx + gy * gy + gz * gz) + climbing + Math.abs(below));
	}
	return rings.keep(set, kept, c, gx, gy, gz, room);
}
