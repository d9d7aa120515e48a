import { expect, test } from 'vitest';
import { placeLabels, sunLabelBox } from '$lib/plan-table/labels';
import { fitted } from '$lib/plan-table/view';
import { quarryPlan } from '$lib/server/demo/plans';
import { casesFor, createRandom, randomPlan, seedFor } from '../../support/random';

const widthOf = (name: string) => name.length * 7.2;

test('every name of the terrace has a place, on a wide drawing and on a narrow one', () => {
	for (const [widthPx, heightPx] of [
		[780, 600],
		[286, 400]
	] as const) {
		const labels = placeLabels(fitted(quarryPlan, widthPx, heightPx), quarryPlan, null);
		expect([...labels.keys()].sort()).toEqual([
			'curtains[0]',
			'curtains[1]',
			'walls[0]',
			'zones[0]'
		]);
	}
});

test('no name lies on another, on the sun’s, or outside', () => {
	const seed = seedFor('labels', 23);
	const random = createRandom(seed);
	for (let i = 0; i < casesFor(100); i++) {
		const plan = randomPlan(random);
		plan.curtains.forEach((curtain, n) => (curtain.name = `Curtain of place ${n}`));
		const view = fitted(plan, 280 + random() * 600, 340);
		const sun = sunLabelBox(60 + random() * 160, 100 + random() * 100);
		const labels = placeLabels(view, plan, { kind: 'walls', index: 0 }, { taken: [sun] });
		const boxes = [...labels].map(([path, { x, y, anchor }]) => {
			const [, kind, index] = /^(\w+)\[(\d+)\]$/.exec(path)!;
			const name =
				(plan[kind as 'curtains'] ?? [])[Number(index)]?.name ??
				`${kind === 'walls' ? 'Wall' : 'Zone'} ${Number(index) + 1}`;
			const left = { start: x, middle: x - widthOf(name) / 2, end: x - widthOf(name) }[anchor];
			return { path, left, right: left + widthOf(name), top: y - 10, bottom: y + 3 };
		});
		for (const [at, box] of boxes.entries()) {
			expect(box.left).toBeGreaterThanOrEqual(0);
			expect(box.right).toBeLessThanOrEqual(view.widthPx);
			for (const other of [...boxes.slice(at + 1), { path: 'sun', ...sun }]) {
				// The selected part is named in any case.
				if (box.path === 'walls[0]' || other.path === 'walls[0]') continue;
				const apart =
					box.left >= other.right ||
					other.left >= box.right ||
					box.top >= other.bottom ||
					other.top >= box.bottom;
				expect(apart).toBe(true);
			}
		}
		if ((plan.walls ?? []).length > 0) expect(labels.has('walls[0]')).toBe(true);
	}
});
