import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { buildingAltitudeDeg, createHorizon, withBuilding } from '$lib/optics';
import { planSchema } from '$lib/schemas/plan';
import { quarryPlan } from '$lib/server/demo/plans';

const seed = Number(process.env.RANDOM_SEED ?? 20270301);
console.log(`skyline: seed ${seed}`);

describe('a building seen from an eye', () => {
	// Worked by hand: as far as it is higher than the eye, 45 degrees.
	test('stands at 45 degrees when it is as far away as it is higher', () => {
		expect(buildingAltitudeDeg({ heightM: 11.6, eyeM: 1.6, distanceM: 10 })).toBeCloseTo(45, 12);
		expect(buildingAltitudeDeg({ heightM: 1.6, eyeM: 1.6, distanceM: 10 })).toBe(0);
		expect(() => buildingAltitudeDeg({ heightM: 1, eyeM: 1, distanceM: 0 })).toThrow(RangeError);
		expect(() => buildingAltitudeDeg({ heightM: NaN, eyeM: 1, distanceM: 1 })).toThrow(RangeError);
	});
});

describe('a skyline with a building before it', () => {
	const skylineOf = fc
		.uniqueArray(fc.integer({ min: 0, max: 359 }), { maxLength: 12 })
		.chain((azimuths) =>
			fc.tuple(
				fc.constant([...azimuths].sort((a, b) => a - b)),
				fc.array(fc.integer({ min: -5, max: 40 }), {
					minLength: azimuths.length,
					maxLength: azimuths.length
				})
			)
		)
		.map(([azimuths, altitudes]) =>
			azimuths.map((azimuth, i): [number, number] => [azimuth, altitudes[i]!])
		);
	const buildingOf = fc.record({
		fromAzimuthDeg: fc.integer({ min: 0, max: 359 }),
		toAzimuthDeg: fc.integer({ min: 0, max: 359 }),
		altitudeDeg: fc.integer({ min: -10, max: 60 })
	});

	test('is the higher of the two at each azimuth, and a skyline that the plan takes', () => {
		fc.assert(
			fc.property(skylineOf, buildingOf, (skyline, building) => {
				const made = withBuilding(skyline, building);
				expect(planSchema.safeParse({ ...quarryPlan, skyline: made }).success).toBe(true);
				const [before, after] = [createHorizon(skyline), createHorizon(made)];
				const { fromAzimuthDeg: from, toAzimuthDeg: to, altitudeDeg } = building;
				const width = (((to - from) % 360) + 360) % 360;
				for (let azimuth = 0.5; azimuth < 360; azimuth += 1) {
					const inside = (((azimuth - from) % 360) + 360) % 360 <= width;
					const old = before.altitudeDegAt(azimuth);
					const expected = inside ? Math.max(old, altitudeDeg) : old;
					expect(Math.abs(after.altitudeDegAt(azimuth) - expected)).toBeLessThan(0.01);
				}
			}),
			{ seed, numRuns: 300 }
		);
	});
});
