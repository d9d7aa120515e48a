import { clipHalfPlane, fillRing, measureSet, subtractSet, uniteSet } from './arc-set';
import { DEG_PER_RAD } from './angles';
import type { RingFrame } from './ring';
import type { Curtain, Eye, Sheet, Site } from './site';

/** Sheets nearer than this to one plane lie in it; an eye nearer than this to a sheet is in it. Metres. */
const PLANE_TOLERANCE_M = 1e-9;

/** A wall this near to edge-on to the sun (sine of the angle) casts no shadow of any width. */
const EDGE_ON = 1e-12;

/** A wall's part in what an eye sees of a curtain. */
const NEVER_HIDES = 0;
const MAY_HIDE = 1;
const HIDES_ALL = 2;

/**
 * How sure an arc must be when the sun may stand anywhere within `reach` of the frame's sun:
 * - EXACT: the sun stands where the frame says; the reach is not looked at.
 * - AT_LEAST: no sun within reach shows less than this arc.
 * - AT_MOST: no sun within reach shows more.
 */
export const EXACT = 0;
export const AT_LEAST = -1;
export const AT_MOST = 1;
export type Surety = typeof EXACT | typeof AT_LEAST | typeof AT_MOST;

/**
 * What a set of eyes sees of the bow in the enabled curtains of a site (section by section the model
 * of one eye at one instant).
 *
 * Every condition is a product g . d >= 0 of a fixed vector g and the ring's direction d(phi), so it is
 * one interval of phi, and what is seen is a union of intersections and differences of intervals:
 * - the curtain's four edges seen from the eye. That the ray goes towards the curtain at all follows
 *   from the left and the right edge together: their sum is the curtain's width times m . d, m pointing
 *   from the eye to its plane;
 * - a wall that hides: its four edges and "nearer than the curtain", delta_c (m_w . d) > delta_w (m_c . d);
 * - a wall that shades: P = E + t d lies in the wall's shadow when it lies between the two upright
 *   planes through the wall's ends along the sun's direction, between the planes through its upper and
 *   lower edge along the sun's direction, and on the shaded side of the wall. Each is linear in P and
 *   needs no crossing of the shadow with the curtain's plane, so a curtain edge-on to the sun or crossed
 *   by the wall is no special case.
 *
 * A wall in a curtain's own plane (both ends within 1e-9 m) neither hides nor shades it: P itself does
 * not count. An eye in a curtain's plane sees nothing in it. An eye on a wall sees nothing: the segment
 * from the eye begins on the wall. A sun exactly in the plane of a wall casts no shadow of any width, and
 * so none is taken from a curtain in that same plane either.
 *
 * Certain arcs (AT_LEAST, AT_MOST): when the sun moves by at most an angle e, the ring can be laid on
 * its new place by a turn that moves no direction by more than e. So g . d changes by at most e |g|, and
 * where g itself depends on the sun (shadows) by at most e times the greatest change of g a radian more.
 * Moving every condition by that much, against the eye or for it, gives an arc that holds for all suns
 * within e: no more is ever assumed than that the sun stays within reach.
 */
export class Sight {
	readonly eyes: readonly Eye[];
	private readonly curtains: readonly Curtain[];
	private readonly curtainIndices: readonly number[];
	private readonly walls: readonly Sheet[];
	/** For each curtain and wall: in one plane. */
	private readonly coplanar: Uint8Array;
	/** For each curtain, wall and eye: NEVER_HIDES, MAY_HIDE or HIDES_ALL. */
	private readonly hiding: Uint8Array;
	/** For each curtain and wall: a shadow may fall on the curtain under the present sun. */
	private readonly shading: Uint8Array;
	/** Axis, up and right against each curtain's across and along, scaled by its ring. */
	private readonly ring: Float64Array;
	private frame: RingFrame | null = null;
	private reach = 0;
	private readonly inCurtain: Float64Array;
	private readonly ofWall: Float64Array;
	private readonly inAny: Float64Array;

	constructor(site: Pick<Site, 'curtains' | 'walls'>, eyes: readonly Eye[]) {
		this.eyes = eyes;
		this.curtainIndices = site.curtains.flatMap(({ enabled }, i) => (enabled ? [i] : []));
		this.curtains = this.curtainIndices.map((i) => site.curtains[i]!);
		this.walls = site.walls;
		const pairs = this.curtains.length * this.walls.length;
		this.coplanar = new Uint8Array(pairs);
		this.hiding = new Uint8Array(pairs * eyes.length);
		this.shading = new Uint8Array(pairs);
		this.ring = new Float64Array(this.curtains.length * 8);
		// A curtain leaves at most 5 pieces of the ring, and a wall cuts each at most 5 times twice.
		const most = 2 * (8 + 12 * this.walls.length);
		this.inCurtain = new Float64Array(most);
		this.ofWall = new Float64Array(32);
		this.inAny = new Float64Array(most * Math.max(1, this.curtains.length));
		this.curtains.forEach((curtain, c) =>
			this.walls.forEach((wall, w) => {
				const pair = c * this.walls.length + w;
				if (inOnePlane(curtain, wall)) this.coplanar[pair] = 1;
				else
					eyes.forEach((eye, e) => {
						this.hiding[pair * eyes.length + e] = hidingOf({ eye, curtain, wall });
					});
			})
		);
	}

	/**
	 * Sets the sun.
	 * @param frame the ring's frame about the sun's position
	 * @param reachRad how far the sun may be from there, for arcs asked as AT_LEAST and AT_MOST
	 */
	setSun(frame: RingFrame, reachRad = 0): void {
		this.frame = frame;
		this.reach = reachRad;
		const { axis, up, right } = frame;
		this.curtains.forEach((curtain, c) => {
			const { cosRadius, sinRadius, acrossX, acrossY, alongX, alongY } = curtain;
			const at = c * 8;
			this.ring[at] = (acrossX * axis.x + acrossY * axis.y) * cosRadius;
			this.ring[at + 1] = (acrossX * up.x + acrossY * up.y) * sinRadius;
			this.ring[at + 2] = (acrossX * right.x + acrossY * right.y) * sinRadius;
			this.ring[at + 3] = (alongX * axis.x + alongY * axis.y) * cosRadius;
			this.ring[at + 4] = (alongX * up.x + alongY * up.y) * sinRadius;
			this.ring[at + 5] = (alongX * right.x + alongY * right.y) * sinRadius;
			this.ring[at + 6] = axis.z * cosRadius;
			this.ring[at + 7] = up.z * sinRadius;
			this.walls.forEach((wall, w) => {
				const pair = c * this.walls.length + w;
				this.shading[pair] =
					this.coplanar[pair] === 0 && mayShade({ curtain, wall, sun: frame.sun, reachRad })
						? 1
						: 0;
			});
		});
	}

	/** Arc in degrees that an eye sees in any enabled curtain, 0 to 360. */
	arcDeg(eye: number, surety: Surety = EXACT): number {
		let total = 0;
		for (let c = 0; c < this.curtains.length; c++) {
			const n = this.see(eye, c, surety);
			if (n === 0) continue;
			total = uniteSet(this.inAny, total, this.inCurtain, n);
		}
		return Math.min(360, measureSet(this.inAny, total) * DEG_PER_RAD);
	}

	/** Numbers of the site's curtains, in the plan's order, that `seenIn` can be asked about. */
	get enabledCurtains(): readonly number[] {
		return this.curtainIndices;
	}

	/**
	 * Pieces of the ring that an eye sees in one curtain, as pairs of pseudo-angles.
	 * @param enabled place of the curtain in `enabledCurtains`
	 */
	seenIn(eye: number, enabled: number): { set: Float64Array; count: number } {
		return { set: this.inCurtain, count: this.see(eye, enabled, EXACT) };
	}

	/** Fills `inCurtain` with what an eye sees in curtain c; returns the number of intervals. */
	private see(e: number, c: number, surety: Surety): number {
		const eye = this.eyes[e]!;
		const curtain = this.curtains[c]!;
		const offset = curtain.acrossX * (curtain.x - eye.x) + curtain.acrossY * (curtain.y - eye.y);
		if (Math.abs(offset) < PLANE_TOLERANCE_M) return 0;
		const ring = this.ring;
		const at = c * 8;
		const side = offset < 0 ? -1 : 1;
		const away = offset * side;
		const m0 = ring[at]! * side;
		const m1 = ring[at + 1]! * side;
		const m2 = ring[at + 2]! * side;
		const e0 = ring[at + 3]! * away;
		const e1 = ring[at + 4]! * away;
		const e2 = ring[at + 5]! * away;
		const z0 = ring[at + 6]! * away;
		const z1 = ring[at + 7]! * away;
		const left = curtain.alongX * (eye.x - curtain.x) + curtain.alongY * (eye.y - curtain.y);
		const right = curtain.widthM - left;
		const below = eye.z - curtain.bottomM;
		const above = curtain.topM - eye.z;
		const slack = surety * this.reach;
		const away2 = away * away;
		const set = this.inCurtain;
		let n = fillRing(set);
		let room = slack === 0 ? 0 : slack * Math.sqrt(left * left + away2);
		n = clipHalfPlane(set, n, left * m0 + e0 + room, left * m1 + e1, left * m2 + e2);
		if (n === 0) return 0;
		room = slack === 0 ? 0 : slack * Math.sqrt(right * right + away2);
		n = clipHalfPlane(set, n, right * m0 - e0 + room, right * m1 - e1, right * m2 - e2);
		if (n === 0) return 0;
		room = slack === 0 ? 0 : slack * Math.sqrt(below * below + away2);
		n = clipHalfPlane(set, n, below * m0 + z0 + room, below * m1 + z1, below * m2);
		if (n === 0) return 0;
		room = slack === 0 ? 0 : slack * Math.sqrt(above * above + away2);
		n = clipHalfPlane(set, n, above * m0 - z0 + room, above * m1 - z1, above * m2);
		for (let w = 0; w < this.walls.length && n > 0; w++) {
			const pair = c * this.walls.length + w;
			const hiding = this.hiding[pair * this.eyes.length + e]!;
			if (hiding === HIDES_ALL) return 0;
			if (hiding === MAY_HIDE) {
				n = subtractSet(set, n, this.ofWall, this.hide(eye, c, this.walls[w]!, away * side, slack));
			}
			if (this.shading[pair] === 1 && n > 0) {
				n = subtractSet(
					set,
					n,
					this.ofWall,
					this.shade(eye, c, this.walls[w]!, away * side, slack)
				);
			}
		}
		return n;
	}

	/** Fills `ofWall` with the directions in which a wall stands before curtain c. */
	private hide(eye: Eye, c: number, wall: Sheet, offset: number, slack: number): number {
		const curtain = this.curtains[c]!;
		const wallOffset = wall.acrossX * (wall.x - eye.x) + wall.acrossY * (wall.y - eye.y);
		const side = wallOffset < 0 ? -1 : 1;
		const away = wallOffset * side;
		const mx = wall.acrossX * side;
		const my = wall.acrossY * side;
		const left = wall.alongX * (eye.x - wall.x) + wall.alongY * (eye.y - wall.y);
		const right = wall.widthM - left;
		const below = eye.z - wall.bottomM;
		const above = wall.topM - eye.z;
		const curtainAway = Math.abs(offset);
		const curtainSide = offset < 0 ? -1 : 1;
		let n = fillRing(this.ofWall);
		n = this.clip(c, n, left * mx + away * wall.alongX, left * my + away * wall.alongY, 0, -slack);
		n = this.clip(
			c,
			n,
			right * mx - away * wall.alongX,
			right * my - away * wall.alongY,
			0,
			-slack
		);
		n = this.clip(c, n, below * mx, below * my, away, -slack);
		n = this.clip(c, n, above * mx, above * my, -away, -slack);
		// Nearer than the curtain.
		return this.clip(
			c,
			n,
			curtainAway * mx - away * curtainSide * curtain.acrossX,
			curtainAway * my - away * curtainSide * curtain.acrossY,
			0,
			-slack
		);
	}

	/** Fills `ofWall` with the directions in which curtain c lies in a wall's shadow. */
	private shade(eye: Eye, c: number, wall: Sheet, offset: number, slack: number): number {
		const { sun } = this.frame!;
		const curtain = this.curtains[c]!;
		const away = Math.abs(offset);
		const mx = offset < 0 ? -curtain.acrossX : curtain.acrossX;
		const my = offset < 0 ? -curtain.acrossY : curtain.acrossY;
		const toSun = wall.acrossX * sun.x + wall.acrossY * sun.y;
		const facing = Math.abs(toSun);
		const reach = slack === 0 ? 0 : this.reach;
		// For the eye (slack above 0) a shadow that may vanish is none.
		if (slack > 0 ? facing <= reach : facing + reach < EDGE_ON) return 0;
		const sunSide = toSun < 0 ? -1 : 1;
		const half = wall.widthM / 2;
		const fromMiddleX = eye.x - wall.x - wall.alongX * half;
		const fromMiddleY = eye.y - wall.y - wall.alongY * half;
		const fromMiddle = Math.sqrt(fromMiddleX * fromMiddleX + fromMiddleY * fromMiddleY);
		// Level, across the sun's direction.
		const nx = -sun.y;
		const ny = sun.x;
		const across = nx * fromMiddleX + ny * fromMiddleY;
		const turning = fromMiddle + away + half;
		const width = half * facing;
		let n = fillRing(this.ofWall);
		n = this.clip(
			c,
			n,
			(width - across) * mx - away * nx,
			(width - across) * my - away * ny,
			0,
			-slack,
			turning
		);
		n = this.clip(
			c,
			n,
			(width + across) * mx + away * nx,
			(width + across) * my + away * ny,
			0,
			-slack,
			turning
		);
		if (facing <= reach) {
			// Which side is shaded is not certain, the upper edge of any shadow is: the wall's own top.
			if (sun.z > reach) {
				const above = wall.topM - eye.z;
				n = this.clip(c, n, above * mx, above * my, -away, -slack);
			}
			return n;
		}
		// Sunward: the wall's plane lies ahead of P along the sun's direction.
		const sx = wall.acrossX * sunSide;
		const sy = wall.acrossY * sunSide;
		const ahead = sx * (wall.x - eye.x) + sy * (wall.y - eye.y);
		n = this.clip(c, n, ahead * mx - away * sx, ahead * my - away * sy, 0, -slack);
		const riseX = sun.z * (ahead * mx - away * sx);
		const riseY = sun.z * (ahead * my - away * sy);
		const below = eye.z - wall.bottomM;
		const above = wall.topM - eye.z;
		const climbing = 2 * away + Math.abs(ahead);
		n = this.clip(
			c,
			n,
			facing * below * mx + riseX,
			facing * below * my + riseY,
			facing * away,
			-slack,
			climbing + Math.abs(below)
		);
		return this.clip(
			c,
			n,
			facing * above * mx - riseX,
			facing * above * my - riseY,
			-facing * away,
			-slack,
			climbing + Math.abs(above)
		);
	}

	/**
	 * Keeps of `ofWall` the directions with g . d >= 0 on the ring of curtain c.
	 * @param slack reach, signed: above 0 keeps all that any sun within reach would keep
	 * @param turning greatest change of g for a radian of the sun's motion
	 */
	private clip(
		c: number,
		n: number,
		gx: number,
		gy: number,
		gz: number,
		slack: number,
		turning = 0
	): number {
		const { axis, up, right } = this.frame!;
		const { cosRadius, sinRadius } = this.curtains[c]!;
		const room = slack === 0 ? 0 : slack * (Math.sqrt(gx * gx + gy * gy + gz * gz) + turning);
		return clipHalfPlane(
			this.ofWall,
			n,
			(gx * axis.x + gy * axis.y + gz * axis.z) * cosRadius + room,
			(gx * up.x + gy * up.y + gz * up.z) * sinRadius,
			(gx * right.x + gy * right.y) * sinRadius
		);
	}
}

/** Distance of a place from a sheet's plane, metres, positive to the left of `along`. */
function planeDistance(sheet: Sheet, x: number, y: number): number {
	return sheet.acrossX * (x - sheet.x) + sheet.acrossY * (y - sheet.y);
}

function inOnePlane(a: Sheet, b: Sheet): boolean {
	const endX = b.x + b.alongX * b.widthM;
	const endY = b.y + b.alongY * b.widthM;
	return (
		Math.abs(planeDistance(a, b.x, b.y)) < PLANE_TOLERANCE_M &&
		Math.abs(planeDistance(a, endX, endY)) < PLANE_TOLERANCE_M
	);
}

/** The four corners of a sheet. */
function cornersOf(sheet: Sheet): Eye[] {
	const endX = sheet.x + sheet.alongX * sheet.widthM;
	const endY = sheet.y + sheet.alongY * sheet.widthM;
	return [
		{ x: sheet.x, y: sheet.y, z: sheet.bottomM },
		{ x: endX, y: endY, z: sheet.bottomM },
		{ x: endX, y: endY, z: sheet.topM },
		{ x: sheet.x, y: sheet.y, z: sheet.topM }
	];
}

/** Whether all corners of `other` lie outside one edge of the cone in which an eye sees a sheet. */
function outsideCone(eye: Eye, sheet: Sheet, other: readonly Eye[]): boolean {
	const offset = planeDistance(sheet, eye.x, eye.y);
	const away = Math.abs(offset);
	const mx = offset > 0 ? -sheet.acrossX : sheet.acrossX;
	const my = offset > 0 ? -sheet.acrossY : sheet.acrossY;
	const left = sheet.alongX * (eye.x - sheet.x) + sheet.alongY * (eye.y - sheet.y);
	const edges: ((ahead: number, along: number, up: number) => number)[] = [
		(ahead, along) => left * ahead + away * along,
		(ahead, along) => (sheet.widthM - left) * ahead - away * along,
		(ahead, _along, up) => (eye.z - sheet.bottomM) * ahead + away * up,
		(ahead, _along, up) => (sheet.topM - eye.z) * ahead - away * up
	];
	return edges.some((edge) =>
		other.every(({ x, y, z }) => {
			const ahead = mx * (x - eye.x) + my * (y - eye.y);
			const along = sheet.alongX * (x - eye.x) + sheet.alongY * (y - eye.y);
			return edge(ahead, along, z - eye.z) < 0;
		})
	);
}

/** Whether a wall can stand between an eye and any point of a curtain. */
function hidingOf({ eye, curtain, wall }: { eye: Eye; curtain: Sheet; wall: Sheet }): number {
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
 * Whether a wall's shadow can fall on a curtain for a sun within reach: no, when all four corners of
 * the curtain lie outside one side of the shadow.
 */
function mayShade({
	curtain,
	wall,
	sun,
	reachRad
}: {
	curtain: Sheet;
	wall: Sheet;
	sun: Eye;
	reachRad: number;
}): boolean {
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
	for (const { x, y, z } of cornersOf(curtain)) {
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
