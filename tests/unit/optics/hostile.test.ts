import { describe, expect, it } from 'vitest';
import { createSite, findWindows, stateAt } from '../../../src/lib/optics';
import { readPlan } from '../../../src/lib/schemas/plan';
import { fourByFour } from '../../support/plans';
import { casesFor, createRandom, seedFor } from '../../support/random';

const GARBAGE: readonly unknown[] = [
	null,
	undefined,
	true,
	'',
	'45',
	'\u0000\n',
	[],
	{},
	[[[]]],
	{ length: 3 },
	[null, null],
	NaN,
	Infinity,
	-Infinity,
	1e308,
	-1e308,
	5e-324,
	-0,
	1e-9,
	1e6,
	new Date(0),
	() => 1,
	10n,
	Symbol('x')
];

/** Puts something else in one or more places of a plan. */
function spoil(random: () => number, plan: unknown): void {
	let node = plan as Record<string, unknown>;
	for (;;) {
		const keys = Object.keys(node);
		const key = keys[Math.floor(random() * keys.length)];
		if (key === undefined) return;
		const child = node[key];
		if (typeof child === 'object' && child !== null && random() < 0.8) {
			node = child as Record<string, unknown>;
			continue;
		}
		const pick = random();
		if (pick < 0.1) delete node[key];
		else if (pick < 0.2 && Array.isArray(node)) node.push(child, child);
		else node[key] = GARBAGE[Math.floor(random() * GARBAGE.length)];
		return;
	}
}

describe('hostile plans', () => {
	it('are refused with the paths of their faults, or give finite answers', () => {
		const random = createRandom(seedFor('hostile plans', 666));
		let refused = 0;
		let taken = 0;
		for (let k = 0; k < casesFor(1500); k++) {
			const plan: unknown = structuredClone(fourByFour());
			for (let i = 0; i <= random() * 3; i++) spoil(random, plan);
			const read = readPlan(plan);
			if (!read.ok) {
				refused++;
				expect(read.faults.length).toBeGreaterThan(0);
				for (const { path, message } of read.faults) {
					expect(path).toMatch(/^[a-zA-Z]+(\[\d+\]|\.[a-zA-Z]+)*$/);
					expect(message).not.toMatch(/\n|undefined|\[object/);
				}
				expect(() => createSite(plan as never)).toThrow(RangeError);
				continue;
			}
			taken++;
			const site = createSite(read.plan);
			const { zones, curtains, sun } = stateAt(site, Date.UTC(2027, 2, 1, 9));
			const numbers = [
				...Object.values(sun),
				...curtains.map(({ radiusDeg }) => radiusDeg),
				...zones.flatMap(({ share, eyes }) => [share, ...eyes.flatMap((eye) => Object.values(eye))])
			];
			expect(numbers.every(Number.isFinite)).toBe(true);
			if (taken % 10 !== 0) continue;
			for (const { windows } of findWindows({ site, from: '2027-03-01', to: '2027-03-01' })) {
				for (const { date, ...rest } of windows) {
					expect(date).toBe('2027-03-01');
					expect(Object.values(rest).every(Number.isFinite)).toBe(true);
				}
			}
		}
		expect(refused).toBeGreaterThan(casesFor(500));
		expect(taken).toBeGreaterThan(casesFor(50));
	}, 600_000);

	it('of ten thousand curtains, empty or good, are refused quickly', () => {
		const plan = fourByFour();
		for (const curtain of [{}, plan.curtains[0], null]) {
			const many = { ...plan, curtains: Array.from({ length: 10_000 }, () => curtain) };
			const startMs = performance.now();
			const read = readPlan(many);
			expect(read.ok).toBe(false);
			expect(performance.now() - startMs).toBeLessThan(2000);
		}
	});
});
