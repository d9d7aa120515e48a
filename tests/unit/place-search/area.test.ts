import { describe, expect, it } from 'vitest';
import {
	areaFault,
	placeInArea,
	segmentInArea,
	standsIn
} from '../../../src/lib/place-search/area';
import { placementField, radicalInverse } from '../../../src/lib/place-search/field';
import {
	bearingsApartDeg,
	curtainAt,
	endsOf,
	moved,
	placementOf,
	turnBetweenDeg,
	type Ground
} from '../../../src/lib/place-search/question';
import { placeQuestion } from '../../support/place-question';
import { quarryTerrace } from '../../support/plans';
import { createRandom, seedFor } from '../../support/random';

const square: Ground[] = [
	[0, 0],
	[10, 0],
	[10, 10],
	[0, 10]
];
/** A square with a bay from the south, 4 to 6 wide and 6 deep. */
const bay: Ground[] = [
	[0, 0],
	[4, 0],
	[4, 6],
	[6, 6],
	[6, 0],
	[10, 0],
	[10, 10],
	[0, 10]
];

describe('a segment in an area', () => {
	it.each([
		['inside', square, [1, 1], [9, 9], true],
		['from corner to corner', square, [0, 0], [10, 10], true],
		['along an edge', square, [0, 0], [10, 0], true],
		['with an end outside', square, [1, 1], [11, 1], false],
		['beside the bay', bay, [1, 1], [3, 9], true],
		['along the bay', bay, [4, 0], [4, 6], true],
		['above the bay', bay, [1, 8], [9, 8], true],
		['along the bay’s end and on', bay, [1, 6], [9, 6], true],
		['across the bay, both ends inside', bay, [1, 3], [9, 3], false],
		['across a corner of the bay', bay, [3, 4], [7, 9], false],
		['touching a corner of the bay', bay, [2, 4], [6, 8], true],
		['in the bay', bay, [5, 1], [5, 5], false],
		['from edge to edge over the bay’s mouth', bay, [0, 0], [10, 0], false]
	] as const)('%s', (_, area, a, b, inside) => {
		expect(segmentInArea(area, a, b)).toBe(inside);
		expect(segmentInArea(area, b, a)).toBe(inside);
		expect(segmentInArea([...area].reverse(), a, b)).toBe(inside);
	});

	it('agrees with looking at many of its places, in stars with many hollows', () => {
		const seed = seedFor('segments in stars', 1618);
		const random = createRandom(seed);
		let inside = 0;
		for (let i = 0; i < 300; i++) {
			const corners = 5 + Math.floor(random() * 8);
			const star = Array.from({ length: corners }, (_, k): Ground => {
				const angle = (2 * Math.PI * k) / corners;
				const radius = 2 + random() * 8;
				return [radius * Math.cos(angle), radius * Math.sin(angle)];
			});
			const place = (): Ground => [random() * 16 - 8, random() * 16 - 8];
			const a = place();
			const b: Ground = [a[0] + random() * 6 - 3, a[1] + random() * 6 - 3];
			const all = Array.from({ length: 2001 }, (_, k): Ground => {
				const t = k / 2000;
				return [a[0] + t * (b[0] - a[0]), a[1] + t * (b[1] - a[1])];
			}).every((one) => placeInArea(star, one));
			expect(segmentInArea(star, a, b), `seed ${seed}, case ${i}`).toBe(all);
			if (all) inside++;
		}
		expect(inside).toBeGreaterThan(20);
	});

	it('has an area that is one', () => {
		expect(areaFault(square)).toBeNull();
		expect(areaFault(square.slice(0, 2))).toBe('corners');
		expect(areaFault([square[0]!, square[2]!, square[1]!, square[3]!])).toBe('crosses');
		const line: Ground[] = [
			[0, 0],
			[1, 1],
			[2, 2]
		];
		expect(areaFault(line)).toBe('empty');
	});
});

describe('placements', () => {
	it('are the same way and back, and a curtain has no front', () => {
		const at = { x: 3, y: -2, bearingDeg: 30 };
		const ends = endsOf(at, 8);
		expect(placementOf(ends)).toEqual({ x: 3, y: -2, bearingDeg: expect.closeTo(30, 9) });
		expect(placementOf({ from: ends.to, to: ends.from }).bearingDeg).toBeCloseTo(30, 9);
		expect(moved(at, { alongM: 2 }).x).toBeCloseTo(4, 9);
		expect(moved(at, { turnDeg: 170 }).bearingDeg).toBeCloseTo(20, 9);
		expect(bearingsApartDeg(175, 5)).toBeCloseTo(10, 9);
		expect(turnBetweenDeg(175, 5)).toBeCloseTo(10, 9);
		expect(turnBetweenDeg(5, 175)).toBeCloseTo(-10, 9);
	});

	it('leave everything of a replaced curtain that is not sought', () => {
		const plan = quarryTerrace();
		Object.assign(plan.curtains[0]!, { waterTemperature: 12, enabled: false });
		const question = placeQuestion(plan, { replaces: 0 });
		expect(curtainAt(question, { x: 0, y: 10, bearingDeg: 90 })).toEqual({
			name: 'West curtain',
			from: [-4, 10],
			to: [4, 10],
			bottom: 0.3,
			top: 6,
			dropDiameter: 400,
			waterTemperature: 12,
			enabled: true
		});
	});

	it('fill an area evenly, wholly inside it, the same every time', () => {
		// Halton 1960: in base 2 the sequence is 1/2, 1/4, 3/4, 1/8, ...
		expect([1, 2, 3, 4, 5].map((i) => radicalInverse(i, 2))).toEqual([
			0.5, 0.25, 0.75, 0.125, 0.625
		]);
		expect(radicalInverse(5, 3)).toBeCloseTo(7 / 9, 12);
		const field = placementField(bay, 3, 500);
		expect(field).toHaveLength(500);
		expect(field).toEqual(placementField(bay, 3, 500));
		expect(field.every((one) => standsIn(bay, one, 3))).toBe(true);
		const west = field.filter(({ x }) => x < 5).length;
		expect(Math.abs(west - 250)).toBeLessThan(40);
	});

	it('are found in a strip no wider than the curtain, and not where none fits', () => {
		const strip: Ground[] = [
			[0, 0],
			[12, 5],
			[11.99, 5.02],
			[-0.01, 0.02]
		];
		const field = placementField(strip, 10, 50);
		expect(field.length).toBeGreaterThan(3);
		expect(field.every((one) => standsIn(strip, one, 10))).toBe(true);
		expect(placementField(square, 15, 50)).toEqual([]);
	});
});
