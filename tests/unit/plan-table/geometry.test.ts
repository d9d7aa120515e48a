import { describe, expect, test } from 'vitest';
import {
	bearingDeg,
	distanceM,
	resizedOutline,
	shadowOf,
	turnedOutline,
	withBearing,
	withCorner,
	withLength,
	withoutCorner,
	type Place
} from '../../../src/lib/plan-table/geometry';

const square: Place[] = [
	[0, 0],
	[4, 0],
	[4, 4],
	[0, 4]
];

describe('lengths and bearings', () => {
	test('bearings go clockwise from north', () => {
		expect(bearingDeg([0, 0], [0, 5])).toBe(0);
		expect(bearingDeg([0, 0], [5, 0])).toBe(90);
		expect(bearingDeg([0, 0], [0, -5])).toBe(180);
		expect(bearingDeg([0, 0], [-5, 0])).toBe(270);
	});

	test('a new bearing turns a sheet about its middle and keeps its length', () => {
		const turned = withBearing({ from: [-3, 2], to: [5, 2] }, 30);
		expect(bearingDeg(turned.from, turned.to)).toBeCloseTo(30, 1);
		expect(distanceM(turned.from, turned.to)).toBeCloseTo(8, 2);
		expect((turned.from[0] + turned.to[0]) / 2).toBeCloseTo(1, 3);
	});

	test('a new length keeps the first end and the bearing', () => {
		const longer = withLength({ from: [1, 1], to: [4, 5] }, 10);
		expect(longer).toEqual({ from: [1, 1], to: [7, 9] });
	});
});

describe('outlines', () => {
	test('a quarter turn of a square is the square with its corners moved on', () => {
		expect(turnedOutline(square, 90)).toEqual([
			[0, 4],
			[0, 0],
			[4, 0],
			[4, 4]
		]);
	});

	test('resizing keeps the south-west corner', () => {
		expect(resizedOutline(square, 6, 2)[0]).toEqual([0, 0]);
		expect(resizedOutline(square, 6, 2)[2]).toEqual([6, 2]);
	});

	test('corners come in half way, also between the last and the first, and never fall below three', () => {
		expect(withCorner(square, 3)[4]).toEqual([0, 2]);
		const three = withoutCorner(square, 1);
		expect(three).toHaveLength(3);
		expect(withoutCorner(three, 0)).toEqual(three);
	});
});

describe('shadows', () => {
	const wall = { from: [0, 0] as Place, to: [2, 0] as Place, bottom: 0, top: 3 };

	test('at 45 degrees a shadow is as long as the wall is high, away from the sun', () => {
		const shadow = shadowOf(wall, { azimuthDeg: 180, altitudeDeg: 45 })!;
		expect(shadow[3]![0]).toBeCloseTo(0);
		expect(shadow[3]![1]).toBeCloseTo(3);
	});

	test('a wall that hangs throws one that begins off its foot', () => {
		const shadow = shadowOf({ ...wall, bottom: 1 }, { azimuthDeg: 270, altitudeDeg: 45 })!;
		expect(shadow[0]![0]).toBeCloseTo(1);
		expect(shadow[3]![0]).toBeCloseTo(3);
	});

	test('none at night, none below the ground', () => {
		expect(shadowOf(wall, { azimuthDeg: 0, altitudeDeg: -1 })).toBeNull();
		expect(shadowOf(wall, { azimuthDeg: 0, altitudeDeg: 20 }, 4)).toBeNull();
	});
});
