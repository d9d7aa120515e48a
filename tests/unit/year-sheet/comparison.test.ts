import { expect, it } from 'vitest';
import { readPlan, type Plan } from '../../../src/lib/schemas/plan';
import { Comparison } from '../../../src/lib/year-sheet/comparison.svelte';
import quarry from '../../fixtures/quarry-terrace.json';

const read = readPlan(quarry);
if (!read.ok) throw new Error('the fixture is no plan');
const first: Plan = read.plan;
const second: Plan = { ...first, rule: { ...first.rule, minimumArc: 90 } };
const versions = [
	{ version: 2, body: second },
	{ version: 1, body: first }
];

it('is nothing, another version, or an edited copy', () => {
	const comparison = new Comparison(
		() => first,
		() => versions
	);
	expect(comparison.plan).toBe(null);
	comparison.choose('2');
	expect(comparison.plan).toBe(second);
	comparison.choose('1');
	expect(comparison.plan).toBe(null);
	comparison.choose('what-if');
	expect(comparison.plan).toEqual(first);
	comparison.fields.minimumArcDeg = '60';
	expect(comparison.plan?.rule.minimumArc).toBe(60);
	comparison.fields.minimumArcDeg = 'wide';
	expect(comparison.faults).toEqual({ minimumArcDeg: 'Give a number.' });
	expect(comparison.plan?.rule.minimumArc).toBe(60);
});

it('keeps what was typed while something else is compared, and begins anew for another plan', () => {
	let base = first;
	const comparison = new Comparison(
		() => base,
		() => versions
	);
	comparison.choose('what-if');
	comparison.fields.minimumArcDeg = '60';
	comparison.choose('2');
	comparison.choose('what-if');
	expect(comparison.fields.minimumArcDeg).toBe('60');
	base = second;
	comparison.reset();
	expect(comparison.fields.minimumArcDeg).toBe('90');
});
