import { describe, expect, test } from 'vitest';
import { planCautions } from '$lib/plan-cautions';
import { quarryPlan } from '$lib/server/demo/plans';
import type { Plan } from '$lib/schemas/plan';

const [west, north] = quarryPlan.curtains as [Plan['curtains'][0], Plan['curtains'][0]];
const [terrace] = quarryPlan.zones as [Plan['zones'][0]];
const told = (plan: Partial<Plan>) =>
	planCautions({ ...quarryPlan, ...plan }, 2027).map(
		({ paths, message }) => `${paths[0]}: ${message}`
	);

test('a plan as it should be has none', () => expect(told({})).toEqual([]));

describe('sizes that are hardly metres', () => {
	test.each<[string, Partial<Plan>, RegExp]>([
		[
			'millimetres',
			{ curtains: [north, { ...west, from: [-1400, -600], to: [-1400, 1000] }] },
			/^curtains\[1\]: West curtain stands 1720 m from the datum\. Are these metres\?$/
		],
		[
			'kilometres',
			{ curtains: [west, north, { ...west, name: 'Model', from: [3, 8], to: [3, 8.02] }] },
			/^curtains\[2\]: Model is 0\.02 m long\. Are these metres\?$/
		],
		[
			'a zone for a mouse',
			{
				zones: [
					terrace,
					{
						...terrace,
						name: 'Spot',
						outline: [
							[0, 0],
							[0.2, 0],
							[0.2, 0.2],
							[0, 0.2]
						]
					}
				]
			},
			/^zones\[1\]: Spot has 400 cm² to stand on/
		]
	])('%s', (_, plan, message) => {
		expect(told(plan)).toHaveLength(1);
		expect(told(plan)[0]).toMatch(message);
	});
});

describe('mist through people', () => {
	const through = (curtain: Partial<typeof west>) =>
		told({ curtains: [west, north, { ...west, name: 'Veil', ...curtain }] });
	test.each<[string, Partial<typeof west>]>([
		['across a zone', { from: [-20, 0], to: [20, 1] }],
		['that begins in it', { from: [0, 0], to: [0, 20] }],
		['all within it', { from: [-1, 0], to: [1, 0] }]
	])('%s is told', (_, ends) =>
		expect(through(ends)).toContainEqual(
			'zones[0]: Veil hangs through Terrace: people would stand in the mist.'
		)
	);
	test.each<[string, Partial<typeof west>]>([
		['beside it', { from: [6.1, -20], to: [6.1, 20] }],
		['over its heads', { from: [-20, 0], to: [20, 1], bottom: 2.4, top: 6 }]
	])('%s is not', (_, curtain) => expect(through(curtain)).toEqual([]));
});

describe('a zone from which no bow was found', () => {
	const behind: Plan['zones'][0] = {
		...terrace,
		name: 'Behind',
		outline: [
			[-60, 40],
			[-50, 40],
			[-50, 50],
			[-60, 50]
		]
	};
	test('is told, by its name', () => {
		const [only, ...more] = told({ zones: [terrace, behind] });
		expect(more).toEqual([]);
		expect(only).toMatch(/^zones\[1\]: No bow was found from Behind/);
	});
	test('is not, while no curtain hangs at all', () => {
		expect(told({ curtains: [], zones: [behind] })).toEqual([]);
		expect(told({ curtains: [{ ...west, enabled: false }], zones: [behind] })).toEqual([]);
	});
});
