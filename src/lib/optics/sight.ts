import { DEG_PER_RAD } from './angles';
import { clipAll, fillRing, hullOf, measureSet, subtractSet, uniteSet } from './arc-set';
import { HIDES_ALL, hidingOf, MAY_HIDE, setHiding } from './hiding';
import type { RingFrame } from './ring';
import { RING_STRIDE, Rings } from './rings';
import { mayShade, setShading } from './shadow';
import { cornersOf, inOnePlane } from './sheet';
import { setView, VIEW_STRIDE, wallNumbers } from './sight-numbers';
import type { Curtain, Eye, Sheet, Site } from './site';
import type { Vector } from './vector';

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

/** Pieces of the ring that a wall's five conditions can leave: far fewer fit on a ring. */
const WALL_ROOM = 64;

/**
 * What a set of eyes sees of the bow in the enabled curtains of a site (section by section the model
 * of one eye at one instant).
 *
 * Every condition is a product g . d >= 0 of a fixed vector g and the ring's direction d(phi), so it is
 * one interval of phi, and what is seen is a union of intersections and differences of intervals:
 * - the curtain's four edges seen from the eye. That the ray goes towards the curtain at all follows
 *   from the left and the right edge together: their sum is the curtain's width times m . d, m pointing
 *   from the eye to its plane;
 * - walls that hide (hiding.ts) and walls that shade (shadow.ts), each again a set of conditions.
 * No condition needs the crossing of a shadow with a plane, so a curtain edge-on to the sun, or crossed
 * by a wall, is no special case.
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
	/** Numbers of the site's enabled curtains, in the plan's order. */
	readonly enabledCurtains: readonly number[];
	private readonly curtains: readonly Curtain[];
	private readonly corners: readonly (readonly Vector[])[];
	private readonly wallSheets: readonly Sheet[];
	private readonly wallCount: number;
	private readonly walls: Float64Array;
	private readonly rings: Rings;
	private readonly views: Float64Array;
	/** For each curtain and wall: in one plane. */
	private readonly coplanar: Uint8Array;
	/** For each eye, curtain and wall: NEVER_HIDES, MAY_HIDE or HIDES_ALL. */
	private readonly hiding: Uint8Array;
	/** For each curtain and wall: a shadow may fall on the curtain under the present sun. */
	private readonly shading: Uint8Array;
	// A broken number from the start: the field then never changes its kind.
	private reach = 0.5;
	private readonly inCurtain: Float64Array;
	private readonly ofWall = new Float64Array(WALL_ROOM);
	private readonly inAny: Float64Array;

	constructor(site: Pick<Site, 'curtains' | 'walls'>, eyes: readonly Eye[]) {
		this.eyes = eyes;
		this.enabledCurtains = site.curtains.flatMap(({ enabled }, i) => (enabled ? [i] : []));
		this.curtains = this.enabledCurtains.map((i) => site.curtains[i]!);
		this.corners = this.curtains.map(cornersOf);
		this.wallSheets = site.walls;
		this.wallCount = site.walls.length;
		this.walls = wallNumbers(site.walls);
		this.rings = new Rings(this.curtains);
		const pairs = this.curtains.length * this.wallCount;
		this.coplanar = new Uint8Array(pairs);
		this.hiding = new Uint8Array(pairs * eyes.length);
		this.shading = new Uint8Array(pairs);
		this.views = new Float64Array(this.curtains.length * eyes.length * VIEW_STRIDE);
		// A curtain leaves at most 5 pieces of the ring, and a wall cuts each at most 5 times twice.
		const most = 2 * (8 + 12 * this.wallCount);
		this.inCurtain = new Float64Array(most);
		this.inAny = new Float64Array(most * Math.max(1, this.curtains.length));
		this.curtains.forEach((curtain, c) => {
			eyes.forEach((eye, e) => {
				setView(this.views, (e * this.curtains.length + c) * VIEW_STRIDE, eye, curtain);
			});
			site.walls.forEach((wall, w) => {
				const pair = c * site.walls.length + w;
				if (inOnePlane(curtain, wall)) this.coplanar[pair] = 1;
				else
					eyes.forEach((eye, e) => {
						this.hiding[e * pairs + pair] = hidingOf({ eye, curtain, wall });
					});
			});
		});
	}

	/**
	 * Sets the sun.
	 * @param frame the ring's frame about the sun's position
	 * @param reachRad how far the sun may be from there, for arcs asked as AT_LEAST and AT_MOST
	 */
	setSun(frame: RingFrame, reachRad = 0): void {
		this.reach = reachRad;
		this.rings.set(frame);
		for (let c = 0, pair = 0; c < this.curtains.length; c++) {
			for (let w = 0; w < this.wallCount; w++, pair++) {
				const shades =
					this.coplanar[pair] === 0 &&
					mayShade(this.wallSheets[w]!, this.corners[c]!, frame.sun, reachRad);
				this.shading[pair] = shades ? 1 : 0;
			}
		}
	}

	/** Arc in degrees that an eye sees in any enabled curtain, 0 to 360. */
	arcDeg(eye: number, surety: Surety = EXACT): number {
		let total = 0;
		for (let c = 0; c < this.curtains.length; c++) {
			const n = this.see(eye, c, surety);
			if (n > 0) total = uniteSet(this.inAny, total, this.inCurtain, n);
		}
		return total === 0 ? 0 : Math.min(360, measureSet(this.inAny, total) * DEG_PER_RAD);
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
		const { views, rings } = this;
		const view = (e * this.curtains.length + c) * VIEW_STRIDE;
		const away = views[view]!;
		if (away === 0) return 0;
		const slack = surety * this.reach;
		const { parts, conditions } = rings;
		const at = c * RING_STRIDE;
		const m0 = parts[at + 8]!;
		const m1 = parts[at + 9]!;
		const m2 = parts[at + 10]!;
		const e0 = parts[at + 11]! * away;
		const e1 = parts[at + 12]! * away;
		const e2 = parts[at + 13]! * away;
		const z0 = parts[at + 2]! * away;
		const z1 = parts[at + 5]! * away;
		const left = views[view + 1]!;
		const right = views[view + 2]!;
		const below = views[view + 3]!;
		const above = views[view + 4]!;
		conditions[0] = left * m0 + e0 + slack * views[view + 5]!;
		conditions[1] = left * m1 + e1;
		conditions[2] = left * m2 + e2;
		conditions[3] = right * m0 - e0 + slack * views[view + 6]!;
		conditions[4] = right * m1 - e1;
		conditions[5] = right * m2 - e2;
		conditions[6] = below * m0 + z0 + slack * views[view + 7]!;
		conditions[7] = below * m1 + z1;
		conditions[8] = below * m2;
		conditions[9] = above * m0 - z0 + slack * views[view + 8]!;
		conditions[10] = above * m1 - z1;
		conditions[11] = above * m2;
		const n = clipAll(this.inCurtain, fillRing(this.inCurtain), conditions, 4);
		return n === 0 || this.wallCount === 0 ? n : this.seePastWalls(e, c, view, n, slack);
	}

	/** Takes out of `inCurtain` what walls hide or shade of it. */
	private seePastWalls(e: number, c: number, view: number, seen: number, slack: number): number {
		const { wallCount, walls, hiding, shading, ofWall, rings, views } = this;
		const set = this.inCurtain;
		const ofEye = e * shading.length;
		let n = seen;
		for (let w = 0, pair = c * wallCount; w < wallCount && n > 0; w++, pair++) {
			const hides = hiding[ofEye + pair]!;
			if (hides === HIDES_ALL) return 0;
			if (hides === MAY_HIDE) {
				const count = setHiding(rings, c, walls, w, views, view, slack);
				const m = clipAll(ofWall, hullOf(ofWall, set, n), rings.conditions, count);
				if (m > 0) n = subtractSet(set, n, ofWall, m);
			}
			if (shading[pair] === 1 && n > 0) {
				const count = setShading(rings, c, walls, w, views, view, slack);
				if (count < 0) continue;
				const m = clipAll(ofWall, hullOf(ofWall, set, n), rings.conditions, count);
				if (m > 0) n = subtractSet(set, n, ofWall, m);
			}
		}
		return n;
	}
}
