import { describe, expect, test } from 'vitest';
import { snapBearing, snapPlace } from '../../../src/lib/plan-table/snap';

const metre = { stepM: 1, rightAngles: true };
const quarters = [0, 90, 180, 270];

describe('a place that is dragged', () => {
	test('goes to whole metres', () => {
		expect(snapPlace([3.4, -1.6], metre)).toEqual([3, -2]);
		expect(snapPlace([3.37, -1.6], { stepM: 0.5, rightAngles: true })).toEqual([3.5, -1.5]);
	});

	test('goes to a right angle that is near, with its length in whole steps', () => {
		const anchor = { at: [0.25, 0] as [number, number], bearingsDeg: quarters };
		expect(snapPlace([0.7, 9.8], metre, [anchor])).toEqual([0.25, 10]);
	});

	test('keeps to the grid when no right angle is near', () => {
		const anchor = { at: [0, 0] as [number, number], bearingsDeg: quarters };
		expect(snapPlace([4.8, 5.2], metre, [anchor])).toEqual([5, 5]);
	});

	test('goes to where two right angles meet', () => {
		const anchors = [
			{ at: [0.2, 0] as [number, number], bearingsDeg: quarters },
			{ at: [10, 7.3] as [number, number], bearingsDeg: quarters }
		];
		expect(snapPlace([0.5, 7.6], metre, anchors)).toEqual([0.2, 7.3]);
	});

	test('is left alone when snapping is off, but for the millimetre', () => {
		const anchor = { at: [0, 0] as [number, number], bearingsDeg: quarters };
		const free = { stepM: null, rightAngles: false };
		expect(snapPlace([0.1004, 9.8766], free, [anchor])).toEqual([0.1, 9.877]);
	});
});

test('a bearing goes to a right angle when near, else to five degrees', () => {
	expect(snapBearing(88, metre, quarters)).toBe(90);
	expect(snapBearing(358, metre, quarters)).toBe(0);
	expect(snapBearing(37, metre, quarters)).toBe(35);
	expect(snapBearing(37.2, { stepM: null, rightAngles: false }, quarters)).toBe(37.2);
});
