import { describe, expect, it } from 'vitest';
import { createSite, seenArcs, stateUnderSun } from '../../../src/lib/optics';
import { ringDirection, ringFrame } from '../../../src/lib/optics/ring';
import { AT_LEAST, AT_MOST, Sight } from '../../../src/lib/optics/sight';
import { positionOfVector, sunVector } from '../../../src/lib/optics/sun';
import type { Plan } from '../../../src/lib/schemas/plan';
import { casesFor, createRandom, randomPlan, seedFor } from '../../support/random';
import { cross, plainEyes, steppedArc, sunVec, type Vec } from '../../support/ray-casting';

const CASES = casesFor(1500);

/** A random plan, sun and eye of it. */
function randomCase(random: () => number) {
	const plan = randomPlan(random);
	// Now and then straight overhead, now and then below the horizon: geometry alone holds for all.
	const altitudeDeg = random() < 0.02 ? 90 : -5 + random() * 62;
	const sun = { azimuthDeg: random() * 360, altitudeDeg };
	const site = createSite(plan);
	const eye = Math.floor(random() * site.zones[0]!.eyes.length);
	return { plan, sun, site, eye };
}

const arcsOf = (plan: Plan, sun: { azimuthDeg: number; altitudeDeg: number }) =>
	stateUnderSun(createSite(plan), sun).zones[0]!.eyes.map(({ arcDeg }) => arcDeg);

const mapPoints = (plan: Plan, move: (point: [number, number]) => [number, number]): Plan => ({
	...plan,
	curtains: plan.curtains.map((c) => ({ ...c, from: move(c.from), to: move(c.to) })),
	walls: (plan.walls ?? []).map((w) => ({ ...w, from: move(w.from), to: move(w.to) }))
});

/** Arc of one given eye, whatever zone it stands in. */
function arcOf(plan: Plan, sun: { azimuthDeg: number; altitudeDeg: number }, eye: Vec): number {
	const sight = new Sight(createSite(plan), [{ x: eye[0], y: eye[1], z: eye[2] }]);
	sight.setSun(ringFrame(sun));
	return sight.arcDeg(0);
}

describe('arcs against rays cast one by one', () => {
	it(`agree within 0.5 degree of 0.1 degree steps in ${CASES} random cases`, () => {
		const seed = seedFor('arcs', 1637);
		const random = createRandom(seed);
		let worst = 0;
		let something = 0;
		let bySheets = 0;
		for (let k = 0; k < CASES; k++) {
			const { plan, sun, site, eye } = randomCase(random);
			const eyes = plainEyes(plan.zones[0]!);
			expect(eyes.length).toBe(site.zones[0]!.eyes.length);
			const exact = stateUnderSun(site, sun).zones[0]!.eyes[eye]!;
			const place = eyes[eye]!;
			[exact.x, exact.y, exact.z].forEach((value, i) => expect(value).toBeCloseTo(place[i]!, 9));
			const stepped = steppedArc(plan, sunVec(sun.azimuthDeg, sun.altitudeDeg), place, 0.1);
			worst = Math.max(worst, Math.abs(stepped - exact.arcDeg));
			if (stepped > 0) something++;
			if (Math.abs(arcOf({ ...plan, walls: [] }, sun, place) - exact.arcDeg) > 1) bySheets++;
			if (Math.abs(stepped - exact.arcDeg) > 0.5) {
				throw new Error(`case ${k} of seed ${seed}: exact ${exact.arcDeg}, stepped ${stepped}`);
			}
		}
		console.log(`arcs: worst ${worst}, with bow ${something}, changed by walls ${bySheets}`);
		expect(something).toBeGreaterThan(CASES / 5);
		expect(bySheets).toBeGreaterThan(CASES / 50);
	}, 600_000);
});

describe('certain arcs', () => {
	it('hold for every sun within reach', () => {
		const seed = seedFor('certain arcs', 2718);
		const random = createRandom(seed);
		for (let k = 0; k < 1500; k++) {
			const { sun, site, eye } = randomCase(random);
			const reach = 0.1 * random() ** 3;
			const bounds = new Sight(site, site.zones[0]!.eyes);
			bounds.setSun(ringFrame(sun), reach);
			const least = bounds.arcDeg(eye, AT_LEAST);
			const most = bounds.arcDeg(eye, AT_MOST);
			const frame = ringFrame(sun);
			const exact = new Sight(site, site.zones[0]!.eyes);
			for (let i = 0; i < 12; i++) {
				// A ring of radius `reach` about the sun, or less: turn the axis' ring frame around.
				const radiusDeg = ((reach * 180) / Math.PI) * (i < 6 ? 1 : random());
				const away = ringDirection({ frame, radiusDeg, phiDeg: random() * 360 });
				exact.setSun(ringFrame(positionOfVector({ x: -away.x, y: -away.y, z: -away.z })));
				const arc = exact.arcDeg(eye);
				if (!(arc >= least - 1e-6 && arc <= most + 1e-6)) {
					throw new Error(`case ${k} of seed ${seed}: ${arc} is not from ${least} to ${most}`);
				}
			}
			exact.setSun(frame, 0);
			expect(exact.arcDeg(eye, AT_LEAST)).toBe(exact.arcDeg(eye));
			expect(exact.arcDeg(eye, AT_MOST)).toBe(exact.arcDeg(eye));
		}
	});
});

describe('properties', () => {
	const each = (count: number, check: (c: ReturnType<typeof randomCase>) => void) => {
		const random = createRandom(seedFor('properties', 4242));
		for (let k = 0; k < casesFor(count); k++) check(randomCase(random));
	};

	it('turning the site and the sun together changes nothing', () => {
		const random = createRandom(9);
		each(400, ({ plan, sun, site, eye }) => {
			const turn = random() * 360;
			const angle = (turn * Math.PI) / 180;
			// Clockwise, as azimuth grows.
			const move = ([x, y]: readonly [number, number]): [number, number] => [
				x * Math.cos(angle) + y * Math.sin(angle),
				y * Math.cos(angle) - x * Math.sin(angle)
			];
			const { x, y, z } = site.zones[0]!.eyes[eye]!;
			const turned = arcOf(
				mapPoints(plan, move),
				{ azimuthDeg: (sun.azimuthDeg + turn) % 360, altitudeDeg: sun.altitudeDeg },
				[...move([x, y]), z]
			);
			expect(turned).toBeCloseTo(arcOf(plan, sun, [x, y, z]), 5);
		});
	});

	it('mirroring the site and the sun mirrors the arcs', () => {
		each(400, ({ plan, sun, site, eye }) => {
			const { x, y, z } = site.zones[0]!.eyes[eye]!;
			const mirrored = createSite(mapPoints(plan, ([px, py]) => [-px, py]));
			const ends = (arcs: ReturnType<typeof seenArcs>) =>
				arcs
					.filter(({ startDeg, endDeg }) => endDeg - startDeg > 1e-6)
					.map(({ startDeg, endDeg, curtainIndex }) => [curtainIndex, startDeg, endDeg]);
			const here = ends(seenArcs({ site, eye: { x, y, z }, sun }));
			const there = ends(
				seenArcs({
					site: mirrored,
					eye: { x: -x, y, z },
					sun: { azimuthDeg: 360 - sun.azimuthDeg, altitudeDeg: sun.altitudeDeg }
				})
			).map(([c, start, end]) => [c!, -end!, -start!]);
			expect(there.length).toBe(here.length);
			// Ends are compared as places on the ring: a piece over the lowest place may count from either side.
			const place = (deg: number) =>
				Math.cos((deg * Math.PI) / 180) + 2 * Math.sin((deg * Math.PI) / 180);
			const sorted = (list: (number | undefined)[][]) =>
				list
					.map(([c, a, b]) => [c!, place(a!), place(b!)])
					.sort((p, q) => p[0]! - q[0]! || p[1]! - q[1]!);
			const [first, second] = [sorted(here), sorted(there)];
			first.forEach((row, i) =>
				row.forEach((value, j) => expect(second[i]![j]).toBeCloseTo(value, 5))
			);
		});
	});

	it('a wider or taller curtain never shows less', () => {
		const random = createRandom(10);
		each(400, ({ plan, sun }) => {
			const before = arcsOf({ ...plan, walls: [] }, sun);
			const grow = random() * 3;
			const wider = plan.curtains.map((c) => {
				const width = Math.hypot(c.to[0] - c.from[0], c.to[1] - c.from[1]);
				const [ex, ey] = [(c.to[0] - c.from[0]) / width, (c.to[1] - c.from[1]) / width];
				return {
					...c,
					to: [c.to[0] + grow * ex, c.to[1] + grow * ey] as [number, number],
					top: c.top + grow
				};
			});
			const after = arcsOf({ ...plan, walls: [], curtains: wider }, sun);
			expect(before.every((arc, i) => after[i]! >= arc - 1e-6)).toBe(true);
		});
	});

	it('one more wall never shows more', () => {
		const random = createRandom(12);
		each(400, ({ plan, sun }) => {
			const before = arcsOf(plan, sun);
			const more = randomPlan(random).walls ?? [];
			const after = arcsOf({ ...plan, walls: [...(plan.walls ?? []), ...more] }, sun);
			expect(before.every((arc, i) => after[i]! <= arc + 1e-6)).toBe(true);
		});
	});

	it('are finite, from 0 to 360, for suns in any direction', () => {
		each(60, ({ site, sun }) => {
			for (const altitudeDeg of [-90, 0, sun.altitudeDeg, 90])
				for (const azimuthDeg of [0, 90, 180, 270, sun.azimuthDeg])
					for (const { arcDeg } of stateUnderSun(site, { azimuthDeg, altitudeDeg }).zones[0]!
						.eyes) {
						if (!(arcDeg >= 0 && arcDeg <= 360)) throw new Error(`arc ${arcDeg}`);
					}
		});
	});
});

describe('frame of the ring', () => {
	it('is right-handed and has its top up, at any altitude', () => {
		for (const altitudeDeg of [-10, 0, 30, 89.999, 90]) {
			const frame = ringFrame({ azimuthDeg: 123, altitudeDeg });
			const list = ({ x, y, z }: { x: number; y: number; z: number }): Vec => [x, y, z];
			const right = cross(list(frame.axis), list(frame.up));
			right.forEach((value, i) => expect(list(frame.right)[i]).toBeCloseTo(value, 12));
			expect(frame.right.z).toBe(0);
			expect(frame.up.z).toBeGreaterThanOrEqual(0);
		}
	});

	it('has phi grow to the right of a viewer who has the sun behind', () => {
		// Sun in the south: the viewer looks north, right is east.
		const frame = ringFrame({ azimuthDeg: 180, altitudeDeg: 20 });
		expect(ringDirection({ frame, radiusDeg: 41, phiDeg: 90 }).x).toBeGreaterThan(0.6);
		expect(sunVector({ azimuthDeg: 180, altitudeDeg: 0 }).y).toBeCloseTo(-1, 12);
	});
});
