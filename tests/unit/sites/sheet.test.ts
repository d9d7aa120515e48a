import { expect, test } from 'vitest';
import { createSite, findWindows } from '$lib/optics';
import type { Plan } from '$lib/schemas/plan';
import { quarryPlan } from '$lib/server/demo/plans';
import { yearOfPlan } from '$lib/server/sites/plan-year';
import { sheetPdf } from '$lib/server/sites/sheet';

const sheetOf = async (plan: Plan) =>
	sheetPdf({
		operator: 'Test Mist Gardens',
		site: 'Łąka, Привет',
		version: 1,
		state: 'draft',
		changedAt: new Date('2027-01-01T00:00:00Z'),
		plan,
		year: await yearOfPlan(plan, 2027)
	});

const curtain = quarryPlan.curtains[0]!;

test.each<[string, Plan]>([
	['the demo’s', quarryPlan],
	['nothing drawn yet', { ...quarryPlan, curtains: [], walls: [], zones: [] }],
	[
		'a table-top model',
		{ ...quarryPlan, walls: [], zones: [], curtains: [{ ...curtain, from: [0, 0], to: [0.1, 0] }] }
	],
	[
		'a hundred curtains over kilometres',
		{
			...quarryPlan,
			curtains: Array.from({ length: 100 }, (_, i) => ({
				...curtain,
				from: [i * 90, 0],
				to: [i * 90 + 5, 5]
			}))
		}
	]
])('a sheet of %s is drawn, the same each time', async (_, plan) => {
	const [first, second] = await Promise.all([sheetOf(plan), sheetOf(plan)]);
	expect(first.subarray(0, 5).toString()).toBe('%PDF-');
	expect(first.equals(second)).toBe(true);
	expect(first.toString('latin1')).not.toContain('NaN');
});

test('its year is that of the engine, month by month', async () => {
	const year = await yearOfPlan(quarryPlan, 2027);
	const whole = findWindows({
		site: createSite(quarryPlan),
		from: '2027-01-01',
		to: '2027-12-31'
	});
	expect(year!.zones.map(({ windows }) => windows)).toEqual(whole.map(({ windows }) => windows));
});
