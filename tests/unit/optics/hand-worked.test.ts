import { describe, expect, it } from 'vitest';
import {
	bowRadiusDeg,
	bowTopDeg,
	createSite,
	findWindows,
	seenArcs,
	stateUnderSun
} from '../../../src/lib/optics';
import type { Plan } from '../../../src/lib/schemas/plan';
import { barePlan, curtain, wall } from '../../support/plans';

const SOUTH = 180;
const arc = (plan: Plan, azimuthDeg: number, altitudeDeg: number) =>
	stateUnderSun(createSite(plan), { azimuthDeg, altitudeDeg }).zones[0]!.eyes[0]!.arcDeg;
const RAD = Math.PI / 180;
const RADIUS = bowRadiusDeg({ dropDiameterUm: 400 });

/** An endless curtain 10 m north of the eye, standing on the level of the eye. */
const northCurtain = (parts: Partial<Plan['curtains'][number]> = {}) =>
	curtain([-5000, 10], [5000, 10], { bottom: 1.6, top: 5000, ...parts });

/** Length of the ring above the level of the eye: cos phi from z = 0: sin h cos rho = cos h sin rho cos phi. */
const aboveLevel = (altitudeDeg: number) =>
	(2 * Math.acos(Math.tan(altitudeDeg * RAD) / Math.tan(RADIUS * RAD))) / RAD;

describe('hand-worked cases', () => {
	it('sun on the axis of the curtain: the arch above the horizon, the same left and right', () => {
		for (const altitudeDeg of [3, 10, 25, 40]) {
			const plan = barePlan({ curtains: [northCurtain()] });
			expect(arc(plan, SOUTH, altitudeDeg)).toBeCloseTo(aboveLevel(altitudeDeg), 2);
			const [piece] = seenArcs({
				site: createSite(plan),
				eye: { x: 0, y: 0, z: 1.6 },
				sun: { azimuthDeg: SOUTH, altitudeDeg }
			});
			expect(piece!.startDeg).toBeCloseTo(-piece!.endDeg, 9);
		}
	});

	it('half of the ring when the sun is on the horizon', () => {
		expect(arc(barePlan({ curtains: [northCurtain()] }), SOUTH, 0)).toBeCloseTo(180, 1);
	});

	it('top of the bow at the radius less the altitude', () => {
		for (const altitudeDeg of [5, 20, 40.5]) {
			const sun = { azimuthDeg: SOUTH, altitudeDeg };
			expect(bowTopDeg(RADIUS, sun)).toBeCloseTo(RADIUS - altitudeDeg, 9);
			const [piece] = seenArcs({
				site: createSite(barePlan({ curtains: [northCurtain()] })),
				eye: { x: 0, y: 0, z: 1.6 },
				sun,
				spacingDeg: 0.02
			});
			const top = piece!.points.reduce((a, b) => (a.z > b.z ? a : b));
			expect(Math.abs(top.phiDeg)).toBeLessThan(0.02);
			expect(top.z).toBeCloseTo(1.6 + 10 * Math.tan((RADIUS - altitudeDeg) * RAD), 4);
			expect(top.y).toBeCloseTo(10, 9);
			expect(top.alongM).toBeCloseTo(5000, 1);
		}
	});

	it('sun higher than the radius over level ground: no bow above the eye, some below it', () => {
		const level = barePlan({ curtains: [northCurtain()] });
		expect(arc(level, SOUTH, RADIUS + 0.01)).toBe(0);
		expect(arc(level, SOUTH, RADIUS - 0.1)).toBeGreaterThan(0);
		const deep = barePlan({ curtains: [northCurtain({ bottom: -5000 })] });
		expect(arc(deep, SOUTH, RADIUS + 5)).toBeGreaterThan(90);
	});

	it('the whole ring in a curtain wide and tall enough: exactly 360', () => {
		const plan = barePlan({
			curtains: [curtain([-5000, 10], [5000, 10], { bottom: -5000, top: 5000 })]
		});
		expect(arc(plan, SOUTH, 10)).toBe(360);
	});

	it('sun straight overhead: the ring about the foot point', () => {
		// 10 m north, down from the eye: the ring goes 90 - rho below the level; the plane is met on the
		// northern half of it, at depth 10 / (tan rho cos(azimuth)).
		const plan = barePlan({
			curtains: [curtain([-5000, 10], [5000, 10], { bottom: -9000, top: 5000 })]
		});
		expect(arc(plan, SOUTH, 90)).toBeGreaterThan(170);
		expect(arc(plan, SOUTH, 90)).toBeLessThan(180);
		expect(arc(plan, 37, 90)).toBeCloseTo(arc(plan, SOUTH, 90), 6);
	});

	it('eye in the plane of the curtain: nothing, beside it and on it', () => {
		const seen = (from: [number, number], to: [number, number], azimuthDeg: number) =>
			seenArcs({
				site: createSite(barePlan({ curtains: [curtain(from, to)] })),
				eye: { x: 0, y: 0, z: 1.6 },
				sun: { azimuthDeg, altitudeDeg: 10 }
			});
		for (const azimuthDeg of [0, 90, 180, 270, 26.5, 206.6]) {
			expect(seen([2, 0], [9, 0], azimuthDeg)).toEqual([]);
			expect(seen([-9, 0], [9, 0], azimuthDeg)).toEqual([]);
			// A plane through the eye that no number meets exactly.
			expect(seen([0.1 * 3, 0.2 * 3], [0.1 * 31, 0.2 * 31], azimuthDeg)).toEqual([]);
		}
	});

	it('curtain edge-on to the sun: one limb of the bow', () => {
		// A curtain along the antisolar direction, 2 m to the right of the eye: only phi above 0 meets it.
		const plan = barePlan({
			curtains: [curtain([2, -5000], [2, 5000], { bottom: 1.6, top: 5000 })]
		});
		const [piece, ...others] = seenArcs({
			site: createSite(plan),
			eye: { x: 0, y: 0, z: 1.6 },
			sun: { azimuthDeg: SOUTH, altitudeDeg: 20 }
		});
		expect(others).toEqual([]);
		expect(piece!.startDeg).toBeGreaterThanOrEqual(0);
		// The curtain's top and its far end cut off a little beside the top of the ring.
		expect(piece!.endDeg).toBeCloseTo(aboveLevel(20) / 2, 2);
		expect(arc(plan, SOUTH, 20)).toBeCloseTo(aboveLevel(20) / 2, 0);
	});

	it('wall touching the curtain, and a zone of three corners', () => {
		const plan = barePlan({
			curtains: [northCurtain()],
			walls: [wall([0, 10], [0, 4], { top: 4000, bottom: -10 })],
			zones: [
				{
					name: 'Triangle',
					outline: [
						[-3, -3],
						[3, -3],
						[0, 3]
					],
					floor: 0,
					eyeHeights: [1.6]
				}
			]
		});
		const { zones } = stateUnderSun(createSite(plan), { azimuthDeg: SOUTH, altitudeDeg: 15 });
		expect(zones[0]!.eyes.length).toBeGreaterThanOrEqual(16);
		for (const eye of zones[0]!.eyes) {
			// Every eye looks past the wall on its own side; from x = 0 the wall has no width.
			expect(Number.isFinite(eye.arcDeg)).toBe(true);
			expect(eye.arcDeg).toBeLessThanOrEqual(aboveLevel(15) + 1e-6);
		}
		const middle = zones[0]!.eyes.filter(({ x }) => x === 0);
		expect(middle.length).toBeGreaterThan(0);
		for (const eye of middle) expect(eye.arcDeg).toBeCloseTo(aboveLevel(15), 1);
		const aside = zones[0]!.eyes.filter(({ x }) => x > 0.5);
		for (const eye of aside) expect(eye.arcDeg).toBeLessThan(aboveLevel(15) - 1);
	});

	it('a bow in two curtains counts once', () => {
		const one = barePlan({ curtains: [northCurtain()] });
		const two = barePlan({
			curtains: [northCurtain(), curtain([-5000, 12], [5000, 12], { bottom: 1.6, top: 5000 })]
		});
		expect(arc(two, SOUTH, 12)).toBeCloseTo(arc(one, SOUTH, 12), 2);
	});

	it('a disabled curtain counts nowhere and is listed', () => {
		const plan = barePlan({ curtains: [northCurtain({ enabled: false })] });
		const state = stateUnderSun(createSite(plan), { azimuthDeg: SOUTH, altitudeDeg: 12 });
		expect(state.zones[0]!.share).toBe(0);
		expect(state.curtains).toEqual([{ curtain: 'Curtain', radiusDeg: RADIUS }]);
	});

	it('no zones, no curtains: nothing to find, nothing thrown', () => {
		const none = createSite(barePlan({ zones: [], curtains: [northCurtain()] }));
		expect(findWindows({ site: none, from: '2027-03-01', to: '2027-03-02' })).toEqual([]);
		expect(stateUnderSun(none, { azimuthDeg: SOUTH, altitudeDeg: 12 }).zones).toEqual([]);
		const dry = createSite(barePlan());
		expect(findWindows({ site: dry, from: '2027-03-01', to: '2027-03-02' })).toEqual([
			{ zone: 'Spot', windows: [] }
		]);
	});
});

describe('walls', () => {
	const view = (walls: Plan['walls']) => barePlan({ curtains: [northCurtain()], walls });
	const open = aboveLevel(10);

	it('hide what is behind them: the left half of the bow', () => {
		// From straight ahead to far left, at arm's length, taller than the bow.
		const plan = view([wall([-4000, 1], [0, 1], { top: 4000, bottom: -10 })]);
		expect(arc(plan, SOUTH, 10)).toBeCloseTo(open / 2, 1);
	});

	it('hide nothing behind the mist or behind the eye', () => {
		const behind = [wall([-40, 11], [40, 11], { top: 40 }), wall([-4, -2], [4, -2], { top: 1.7 })];
		expect(arc(view(behind), SOUTH, 10)).toBeCloseTo(open, 2);
	});

	it('shade the mist: no sun, no bow', () => {
		// 50 m south of the mist, 1000 m tall: at 10 degrees its shadow covers all of the curtain that shows bow.
		const plan = view([wall([-4000, -40], [4000, -40], { top: 1000 })]);
		expect(arc(plan, SOUTH, 10)).toBe(0);
		// A low one shades the mist up to 8 - 50 tan 10 = -0.8 m: nothing.
		const low = view([wall([-4000, -40], [4000, -40], { top: 8 })]);
		expect(arc(low, SOUTH, 10)).toBeCloseTo(open, 2);
	});

	it('shade the mist up to the shadow of their upper edge', () => {
		// Wall 20 m before the mist, behind the eye, top 8 m: shadow to 8 - 20 tan 10 = 4.4735 m, that is
		// 16.03 degrees of elevation straight ahead. What is left lies above a level line on the curtain.
		const plan = view([wall([-4000, -10], [4000, -10], { top: 8 })]);
		const edge = 8 - 20 * Math.tan(10 * RAD);
		const raised = barePlan({ curtains: [northCurtain({ bottom: edge })] });
		expect(arc(plan, SOUTH, 10)).toBeCloseTo(arc(raised, SOUTH, 10), 6);
		expect(arc(plan, SOUTH, 10)).toBeLessThan(open - 20);
	});

	it('hide and shade together: each takes its own half', () => {
		const hides = wall([-4000, 1], [0, 1], { top: 4000, bottom: -10 });
		const shades = wall([0, -10], [4000, -10], { top: 4000 });
		expect(arc(view([shades]), SOUTH, 10)).toBeCloseTo(open / 2, 1);
		expect(arc(view([hides, shades]), SOUTH, 10)).toBeLessThan(0.2);
	});

	it('in the plane of the curtain neither hide nor shade it', () => {
		const inPlane = [
			wall([-50, 10], [50, 10], { top: 50 }),
			wall([60, 10], [70, 10], { top: 500 })
		];
		expect(arc(view(inPlane), SOUTH, 10)).toBe(arc(view([]), SOUTH, 10));
		// Also for a plane that no number meets exactly.
		const along = (t: number): [number, number] => [15 + t / 3, -8 + (17 * t) / 3];
		const oblique = (walls: Plan['walls']) =>
			barePlan({ curtains: [curtain(along(0), along(3))], walls });
		for (const azimuthDeg of [200, 230, 270, 300]) {
			expect(arc(oblique([wall(along(0.7), along(2.1), { top: 9 })]), azimuthDeg, 10)).toBe(
				arc(oblique([]), azimuthDeg, 10)
			);
		}
	});

	it('that cross the plane of the mist shade only what is behind them as seen from the sun', () => {
		// Through the curtain's plane at x = 0, sun from the south-west: the part south of the plane shades
		// mist to the north-east of it, x above 0.
		const plan = view([wall([0, -20], [0, 30], { top: 4000, bottom: -10 })]);
		// From (-3, -25) the wall hides the mist from x = 0 to where the ray past its southern end falls, and
		// its shadow lies from x = 0 to 30, where its southern end, 30 m before the mist, casts it.
		const pieces = seenArcs({
			site: createSite(plan),
			eye: { x: -3, y: -25, z: 1.6 },
			sun: { azimuthDeg: 225, altitudeDeg: 10 }
		});
		expect(pieces.length).toBe(2);
		for (const { points } of pieces)
			for (const { x } of points) expect(x <= 1e-6 || x >= 30 - 1e-6).toBe(true);
	});

	it('the eye stands on hide everything', () => {
		const on = view([wall([-1, 0], [1, 0], { bottom: 0, top: 3 })]);
		const eye = seenArcs({
			site: createSite(on),
			eye: { x: 0, y: 0, z: 1.6 },
			sun: { azimuthDeg: SOUTH, altitudeDeg: 10 }
		});
		expect(eye).toEqual([]);
	});

	it('edge-on to the sun shade nothing', () => {
		const plan = view([wall([0, -30], [0, -5], { top: 400 })]);
		expect(arc(plan, SOUTH, 10)).toBeCloseTo(open, 1);
	});
});
