import { expect, test } from 'vitest';
import { createSite } from '../../../src/lib/optics';
import { besideLine, faceArcs, firstEndIsLeft } from '../../../src/lib/plan-table/face';
import { arcsFor } from '../../../src/lib/plan-table/seen';
import { barePlan } from '../../support/plans';

const site = createSite(
	barePlan({
		curtains: [
			{ from: [-20, 12], to: [20, 12], bottom: 0, top: 9, dropDiameter: 400 },
			{ from: [20, 12], to: [-20, 12], bottom: 0, top: 9, dropDiameter: 400, enabled: false }
		]
	})
);
const eye = { x: 0, y: 0, z: 1.6 };
const sun = { azimuthDeg: 180, altitudeDeg: 20 };

test('the bow stands on the curtain’s face, alike on both sides of the middle, highest there', () => {
	const [arc] = faceArcs(arcsFor(site, eye, sun), eye);
	const { line } = arc!;
	const [left, right] = [line[0]!, line.at(-1)!];
	expect(left[0] + right[0]).toBeCloseTo(40, 6);
	expect(left[0]).toBeLessThan(right[0]);
	const top = line.reduce((a, b) => (b[1] > a[1] ? b : a));
	expect(top[0]).toBeCloseTo(20, 0);
	// The top of the ring is the radius less the sun's altitude above the eye: 12 m tan(41.3 - 20).
	expect(top[1]).toBeCloseTo(1.6 + 12 * Math.tan((21.3 * Math.PI) / 180), 1);
	expect(arcsFor(site, eye, { ...sun, altitudeDeg: -2 })).toEqual([]);
});

test('left of a line that runs east is north', () => {
	expect(
		besideLine(
			[
				[0, 0],
				[2, 0]
			],
			0.5
		)
	).toEqual([
		[0, 0.5],
		[2, 0.5]
	]);
});

test('an eye south of a curtain that runs east has its first end on the left', () => {
	expect(firstEndIsLeft(site, 0, eye)).toBe(true);
	expect(firstEndIsLeft(site, 1, eye)).toBe(false);
});
