import { describe, expect, test } from 'vitest';
import { clashWords, mergePlans, withTheirs } from '$lib/plan-merge/merge';
import { quarryPlan } from '$lib/server/demo/plans';
import { readPlan, type Plan } from '$lib/schemas/plan';
import { casesFor, createRandom, randomPlan, seedFor } from '../../support/random';

const base = quarryPlan;
const [west, north] = base.curtains as [Plan['curtains'][0], Plan['curtains'][0]];
const [terrace] = base.zones as [Plan['zones'][0]];
const withCurtains = (...curtains: Plan['curtains']): Plan => ({ ...base, curtains });
const merge = (mine: Plan, theirs: Plan) => mergePlans({ base, mine, theirs });

describe('what one of two changed is taken', () => {
	test('in different parts, different fields of a part, the rule and the skyline', () => {
		const mine = {
			...withCurtains({ ...west, top: 7 }, north),
			rule: { ...base.rule, minimumArc: 50 }
		};
		const theirs: Plan = {
			...withCurtains({ ...west, dropDiameter: 300, waterFlow: 12 }, { ...north, enabled: false }),
			rule: { ...base.rule, minimumShare: 0.5 },
			skyline: [[0, 3]],
			walls: []
		};
		const { plan, clashes, taken } = merge(mine, theirs);
		expect(clashes).toEqual([]);
		expect(taken).toBe(6);
		expect(plan).toEqual({
			...mine,
			curtains: [
				{ ...west, top: 7, dropDiameter: 300, waterFlow: 12 },
				{ ...north, enabled: false }
			],
			walls: [],
			rule: { minimumArc: 50, minimumShare: 0.5, minimumSunAltitude: 3 },
			skyline: [[0, 3]]
		});
	});

	test('with parts that were added, taken out, renamed and put in another order', () => {
		const east = { ...west, name: 'East curtain', from: [14, 0], to: [14, 9] } as typeof west;
		const south = { ...east, name: 'South curtain' };
		const mine = withCurtains(east, { ...north, name: 'Far curtain' });
		const theirs = withCurtains(north, { ...west }, south);
		const { plan, clashes } = merge(mine, theirs);
		expect(clashes).toEqual([]);
		expect(plan.curtains.map(({ name }) => name)).toEqual([
			'Far curtain',
			'East curtain',
			'South curtain'
		]);
	});

	test('and what both did alike is there once', () => {
		const east = { ...west, name: 'East curtain' };
		const both = withCurtains({ ...west, top: 9 }, north, east);
		const { plan, clashes, taken } = merge(both, both);
		expect({ plan, clashes, taken }).toEqual({ plan: both, clashes: [], taken: 0 });
	});

	test('and a field that they emptied is empty', () => {
		const wet = { ...west, waterTemperature: 12 };
		const { plan } = mergePlans({
			base: withCurtains(wet, north),
			mine: withCurtains({ ...wet, top: 9 }, north),
			theirs: base
		});
		expect(plan.curtains[0]).toEqual({ ...west, top: 9 });
		expect('waterTemperature' in plan.curtains[0]!).toBe(false);
	});
});

describe('what both changed is told', () => {
	test('with mine in the plan and theirs at hand', () => {
		const mine = withCurtains({ ...west, from: [-15, -6], dropDiameter: 500 }, north);
		const theirs = withCurtains({ ...west, to: [-14, 12], dropDiameter: 350 }, north);
		const { plan, clashes } = merge(mine, theirs);
		expect(plan).toEqual(mine);
		expect(clashes.map(clashWords)).toEqual([
			'West curtain, ends: both changed it. Yours stays.',
			'West curtain, drops: both changed it. Yours stays.'
		]);
		// Half of each would be a curtain that nobody drew.
		expect(withTheirs(plan, clashes[0]!).curtains[0]).toEqual({
			...west,
			from: west.from,
			to: [-14, 12],
			dropDiameter: 500
		});
		expect(clashes.reduce(withTheirs, plan)).toEqual(theirs);
	});

	test('in the rule and the skyline too', () => {
		const mine: Plan = { ...base, skyline: [[0, 1]], rule: { ...base.rule, minimumArc: 50 } };
		const theirs: Plan = { ...base, skyline: [[0, 2]], rule: { ...base.rule, minimumArc: 60 } };
		const { plan, clashes } = merge(mine, theirs);
		expect(clashes.map(({ path }) => path)).toEqual(['rule.minimumArc', 'skyline']);
		expect(clashes.reduce(withTheirs, plan)).toEqual(theirs);
	});

	test.each([
		['they removed', withCurtains({ ...west, top: 9 }, north), withCurtains(north), 'theirs gone'],
		['I removed', withCurtains(north), withCurtains({ ...west, top: 9 }, north), 'mine gone']
	])('a part that the other changed and %s stays', (_, mine, theirs, kind) => {
		const { plan, clashes } = merge(mine, theirs);
		expect(plan.curtains).toEqual([{ ...west, top: 9 }, north]);
		expect(clashes).toMatchObject([{ path: 'curtains[0]', what: 'West curtain', kind }]);
	});

	test('and a zone that both named alike is left to the plan’s own check', () => {
		const named = (name: string) => ({ ...base, zones: [terrace, { ...terrace, name }] });
		const { plan } = merge(named('Lawn'), {
			...named('Lawn'),
			zones: [terrace, { ...terrace, name: 'Lawn', floor: 1 }]
		});
		expect(plan.zones.map(({ name }) => name)).toEqual(['Terrace', 'Lawn', 'Lawn']);
	});
});

describe('whatever the plans', () => {
	const seed = seedFor('merge', 41);
	const random = createRandom(seed);
	const plans = Array.from({ length: casesFor(60) }, () => {
		const read = readPlan(randomPlan(random));
		if (!read.ok) throw new Error('a random plan is wrong');
		return read.plan;
	});
	let made = 0;
	/** The same plan with some parts changed, taken out and added; what was made bears a name of its own. */
	const worked = (plan: Plan): Plan => {
		const work = <T extends object>(parts: readonly T[]): T[] =>
			parts.flatMap((part) => {
				const what = random();
				const name = `Made ${made++}`;
				if (what < 0.2) return [];
				if (what < 0.4) return [{ ...part, name, bottom: -random() }];
				if (what < 0.6) return [part, { ...part, name, to: [40 + random(), 40] }];
				return [part];
			});
		return { ...plan, curtains: work(plan.curtains), walls: work(plan.walls ?? []) };
	};
	const namesOf = ({ curtains, walls }: Plan) =>
		[...curtains, ...(walls ?? [])].flatMap(({ name }) => (name?.startsWith('Made') ? name : []));

	test(`who changed nothing gets the other’s, and with both alike it is that (seed ${seed})`, () => {
		for (const plan of plans) {
			const other = worked(plan);
			const whole = { ...plan, walls: plan.walls ?? [] };
			const taken = mergePlans({ base: whole, mine: whole, theirs: other });
			expect(taken.clashes).toEqual([]);
			expect(sorted(taken.plan)).toEqual(sorted(other));
			const kept = mergePlans({ base: whole, mine: other, theirs: whole });
			expect(kept.clashes).toEqual([]);
			expect(kept.taken).toBe(0);
			expect(sorted(kept.plan)).toEqual(sorted(other));
			const same = mergePlans({ base: whole, mine: other, theirs: other });
			expect(same.clashes).toEqual([]);
			expect(sorted(same.plan)).toEqual(sorted(other));
		}
	});

	test(`nothing that either made is lost (seed ${seed})`, () => {
		for (const plan of plans) {
			const [mine, theirs] = [worked(plan), worked(plan)];
			const { plan: merged, clashes } = mergePlans({ base: plan, mine, theirs });
			const there = new Set([
				...namesOf(merged),
				...clashes.map(({ theirs: side }) => side?.['name'])
			]);
			for (const name of [...namesOf(mine), ...namesOf(theirs)]) expect(there).toContain(name);
		}
	});
});

/** The same parts in another order are the same plan. */
function sorted(plan: Plan) {
	const inOrder = <T>(parts: readonly T[]) =>
		parts.map((part) => JSON.stringify(part, Object.keys(part as object).sort())).sort();
	return { ...plan, curtains: inOrder(plan.curtains), walls: inOrder(plan.walls ?? []) };
}
