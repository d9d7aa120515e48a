import { describe, expect, test } from 'vitest';
import { expectOf, guideDiametersUm } from '$lib/mist/expect';
import { driftM, fallSpeedMPerS } from '$lib/mist/fall';
import { flowLPerMin, flowWords, waterM3 } from '$lib/mist/flow';
import { quarryPlan } from '$lib/server/demo/plans';

describe('drops fall', () => {
	// R. Gunn, G. D. Kinzer, "The terminal velocity of fall for water droplets in stagnant air",
	// Journal of Meteorology 6 (1949), table 2, m/s by mm; the figures are from memory.
	test.each([
		[100, 0.27],
		[200, 0.72],
		[300, 1.17],
		[400, 1.62],
		[500, 2.06],
		[1000, 4.03],
		[2000, 6.49]
	])('of %d µm as fast as was measured, within a twelfth', (diameterUm, measured) => {
		expect(Math.abs(fallSpeedMPerS(diameterUm) / measured - 1)).toBeLessThan(1 / 12);
	});

	test('the finest by the law of Stokes', () => {
		const stokes = (998.8 * 9.80665 * 5e-6 ** 2) / (18 * 1.789e-5);
		expect(fallSpeedMPerS(5) / stokes).toBeCloseTo(1, 2);
	});

	test('aside by the wind, in proportion to height and wind', () => {
		const drift = driftM({ dropDiameterUm: 420, heightM: 6, windMPerS: 3 });
		expect(drift).toBeCloseTo(18 / fallSpeedMPerS(420), 9);
	});

	test.each([0, 4.9, 3001, NaN, -1])('%d µm is refused', (diameterUm) =>
		expect(() => fallSpeedMPerS(diameterUm)).toThrow(RangeError)
	);
});

describe('what to expect', () => {
	test('coarser drops give a larger, narrower, more vivid bow and fall faster', () => {
		const steps = guideDiametersUm.map((um) => expectOf(um)!);
		for (const [i, step] of steps.entries()) {
			const finer = steps[i - 1];
			if (!finer) continue;
			expect(step.radiusDeg).toBeGreaterThan(finer.radiusDeg);
			expect(step.widthDeg).toBeLessThan(finer.widthDeg);
			expect(step.fallMPerS).toBeGreaterThan(finer.fallMPerS);
		}
		expect(steps[0]!.colours).toBe('pale, nearly white');
		expect(steps.at(-1)!.colours).toBe('strong colours');
	});

	test.each([
		[4, undefined],
		[3001, undefined],
		[NaN, undefined],
		[420, -1],
		[420, 61]
	])('nothing of %d µm at %d °C', (um, celsius) => expect(expectOf(um, celsius)).toBeNull());
});

describe('flow', () => {
	const [west, north] = quarryPlan.curtains as [
		(typeof quarryPlan.curtains)[0],
		(typeof quarryPlan.curtains)[0]
	];
	const planWith = (...curtains: typeof quarryPlan.curtains) => ({ ...quarryPlan, curtains });

	test('is that of the curtains that are on', () => {
		const plan = planWith(
			{ ...west, waterFlow: 38 },
			{ ...north, waterFlow: 31, enabled: false },
			{ ...north, waterFlow: 0 }
		);
		expect(flowLPerMin(plan)).toBe(38);
		expect(waterM3(38, 60)).toBeCloseTo(2.28, 9);
	});

	test('that is not given is said to be unknown, not none', () => {
		const { waterFlow: _, ...unknown } = west;
		expect(flowLPerMin(planWith(unknown))).toBeNull();
		expect(flowWords(planWith(unknown))).toBe('');
		expect(flowWords(planWith(unknown, { ...north, waterFlow: 30 }))).toBe(
			'Curtains switched on take 30.0 litres a minute, 1.80 m³ an hour; the flow of 1 more is not known.'
		);
	});
});
