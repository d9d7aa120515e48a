import { expect, test } from 'vitest';
import {
	fitted,
	gridLines,
	pannedBy,
	roundLengthM,
	toGround,
	toScreen,
	zoomedAt
} from '../../../src/lib/plan-table/view';
import { barePlan, quarryTerrace } from '../../support/plans';

const view = { centre: [2, 3] as [number, number], pxPerM: 10, widthPx: 600, heightPx: 400 };

test('north is up and east is right', () => {
	expect(toScreen(view, [2, 3])).toEqual([300, 200]);
	expect(toScreen(view, [3, 4])).toEqual([310, 190]);
	expect(toGround(view, [310, 190])).toEqual([3, 4]);
});

test('zooming keeps what is under the pointer; panning follows it', () => {
	const before = toGround(view, [120, 80]);
	const after = toGround(zoomedAt(view, 2.5, [120, 80]), [120, 80]);
	expect(after[0]).toBeCloseTo(before[0]);
	expect(after[1]).toBeCloseTo(before[1]);
	expect(toScreen(pannedBy(view, 15, -20), [2, 3])).toEqual([315, 180]);
});

test('the whole plan fits, and an empty one too', () => {
	const plan = quarryTerrace();
	const fit = fitted(plan, 360, 320);
	for (const { from, to } of plan.curtains) {
		for (const place of [from, to]) {
			const [x, y] = toScreen(fit, place);
			expect(x).toBeGreaterThan(0);
			expect(x).toBeLessThan(360);
			expect(y).toBeGreaterThan(0);
			expect(y).toBeLessThan(320);
		}
	}
	expect(fitted(barePlan({ zones: [] }), 400, 400).pxPerM).toBeGreaterThan(5);
});

test('the scale bar is a round length, the grid never too fine', () => {
	expect(roundLengthM(view, 120)).toBe(10);
	expect(roundLengthM({ ...view, pxPerM: 55 }, 120)).toBe(2);
	for (const pxPerM of [0.02, 0.3, 4, 37, 800]) {
		const { stepM, xs } = gridLines({ ...view, pxPerM });
		expect(stepM * pxPerM).toBeGreaterThanOrEqual(24 - 1e-9);
		expect(xs.length).toBeLessThan(30);
	}
});
