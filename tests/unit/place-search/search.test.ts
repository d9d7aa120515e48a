import { describe, expect, it } from 'vitest';
import { standsIn } from '../../../src/lib/place-search/area';
import { apart, clearNiches, nicheOf } from '../../../src/lib/place-search/clear';
import { climb } from '../../../src/lib/place-search/climb';
import { placementField } from '../../../src/lib/place-search/field';
import { flatnessOf } from '../../../src/lib/place-search/flatness';
import type { PlaceQuestion, Placement } from '../../../src/lib/place-search/question';
import { searchPlaces, type PlaceWorker } from '../../../src/lib/place-search/search';
import { usualEffort, type SearchProgress } from '../../../src/lib/place-search/suggestion';
import { PlaceWork } from '../../../src/lib/place-search/work';
import { createSite, findWindows } from '../../../src/lib/optics';
import { yearTotals } from '../../../src/lib/schedule';
import { planWith } from '../../../src/lib/place-search/question';
import {
	gridOf,
	placeQuestion,
	seasonMinutes,
	terraceQuestion
} from '../../support/place-question';
import { quarryTerrace } from '../../support/plans';
import { createRandom, randomPlan, seedFor } from '../../support/random';

/** Workers of one thread; the work is made when the first job comes. */
function workersOf(question: PlaceQuestion, count = 2): PlaceWorker[] {
	let work: PlaceWork | null = null;
	return Array.from({ length: count }, (): PlaceWorker => async (job) => {
		work ??= new PlaceWork(question);
		return work.do(job);
	});
}

describe('the search on a small grid', () => {
	it.each([11, 12, 13, 14])(
		'finds the place that counting everywhere to the second finds, seed %i',
		async (ownSeed) => {
			const seed = seedFor('small grid', ownSeed);
			const random = createRandom(seed);
			// A plan under which something is seen at all: one in two is not.
			for (;;) {
				const plan = randomPlan(random);
				plan.rule.minimumArc = Math.min(plan.rule.minimumArc, 40);
				plan.rule.minimumShare = Math.min(plan.rule.minimumShare, 0.7);
				const question = placeQuestion(plan, {
					replaces: 0,
					season: { from: '2027-05-01', to: '2027-05-06' }
				});
				const grid = gridOf(11, 4, 4).filter((one) =>
					standsIn(question.area, one, question.curtain.lengthM)
				);
				const exact = grid.map((one) => seasonMinutes(question, one));
				const most = Math.max(...exact);
				if (most < 60) continue;
				const { suggestions, judged } = await searchPlaces({
					question,
					field: grid,
					workers: workersOf(question),
					effort: { ...usualEffort, closer: 24, climbs: 0, counted: 4 }
				});
				expect(judged).toBeGreaterThanOrEqual(grid.length);
				expect(suggestions[0]?.totals?.openMinutes).toBeCloseTo(most, 6);
				const best = suggestions[0]!.placement;
				expect(grid.filter((_, i) => exact[i] === most)).toContainEqual(best);
				break;
			}
		},
		60_000
	);
});

const fortnight = { from: '2027-05-01', to: '2027-05-14' };

describe('a whole search', () => {
	it('shows what the year sheet shows, from different places, better than the field', async () => {
		const question = terraceQuestion(quarryTerrace(), { season: fortnight });
		const { lengthM } = question.curtain;
		const field = placementField(question.area, lengthM, 300);
		const seen: SearchProgress[] = [];
		const result = await searchPlaces({
			question,
			field,
			workers: workersOf(question),
			effort: { ...usualEffort, closer: 20, climbs: 6 },
			onprogress: (progress) => seen.push(progress)
		});
		expect(result.stopped).toBe(false);
		expect(result.judged).toBe(seen.at(-1)?.judged);
		expect(result.judged).toBeGreaterThan(field.length);
		expect(result.suggestions.length).toBeGreaterThanOrEqual(2);

		const stages = [...new Set(seen.map(({ stage }) => stage))];
		expect(stages[0]).toBe('field');
		expect(stages).toEqual(expect.arrayContaining(['closer', 'climb', 'count', 'flatness']));
		expect(seen.filter(({ stage }) => stage === 'field').at(-1)).toMatchObject({
			done: field.length,
			of: field.length
		});

		for (const [i, { placement, totals, flatness }] of result.suggestions.entries()) {
			expect(standsIn(question.area, placement, lengthM)).toBe(true);
			const site = createSite(planWith(question, placement));
			const windows = findWindows({ site, from: '2027-01-01', to: '2027-12-31' })[0]!.windows;
			const sheet = yearTotals({
				year: 2027,
				windows,
				clock: site.clock,
				pattern: question.pattern,
				capacity: question.capacity,
				season: question.season
			});
			expect(totals).toEqual({
				...sheet.year,
				years: [2027],
				months: sheet.months.filter(({ month }) => month === '2027-05')
			});
			expect(flatness).not.toBeNull();
			if (i > 0) {
				const before = result.suggestions[i - 1]!;
				expect(before.totals!.openMinutes).toBeGreaterThanOrEqual(totals!.openMinutes);
			}
			for (const other of result.suggestions.slice(0, i)) {
				expect(apart(other.placement, placement, nicheOf(lengthM))).toBeGreaterThanOrEqual(1);
			}
		}
		const best = result.suggestions[0]!.totals!.openMinutes;
		expect(best).toBeGreaterThan(result.present!.openMinutes);
		const work = new PlaceWork(question);
		const ofField = Math.max(...field.map((one) => work.judge.fineMinutes(one)));
		expect(best).toBeGreaterThan(0.99 * ofField);
		expect(result.sunMinutes).toBe(work.do({ kind: 'sun' }));
	}, 60_000);

	it('stops at once and keeps the best so far', async () => {
		const question = terraceQuestion(quarryTerrace(), { season: fortnight });
		const field = placementField(question.area, question.curtain.lengthM, 200);
		const stop = new AbortController();
		const work = new PlaceWork(question);
		let jobs = 0;
		const worker: PlaceWorker = async (job) => {
			// The last job never ends: the search does not wait for it.
			if (++jobs > 5) return new Promise(() => stop.abort());
			return work.do(job);
		};
		const result = await searchPlaces({
			question,
			field,
			workers: [worker],
			signal: stop.signal
		});
		expect(jobs).toBe(6);
		expect(result).toMatchObject({ stopped: true, present: null, sunMinutes: null });
		expect(result.judged).toBe(60);
		const most = Math.max(...field.slice(0, 60).map((one) => work.judge.coarseMinutes(one)));
		expect(result.suggestions[0]).toMatchObject({ minutes: most, totals: null, flatness: null });

		const already = await searchPlaces({
			question,
			field,
			workers: [worker],
			signal: AbortSignal.abort()
		});
		expect(already).toMatchObject({ stopped: true, suggestions: [], judged: 0 });
	});

	it('says that there is nothing to be seen, and passes on what goes wrong', async () => {
		const plan = quarryTerrace();
		plan.curtains = plan.curtains.slice(0, 1);
		plan.rule.minimumArc = 300;
		const question = terraceQuestion(plan, { season: fortnight });
		const field = placementField(question.area, question.curtain.lengthM, 60);
		const result = await searchPlaces({ question, field, workers: workersOf(question) });
		expect(result).toMatchObject({ suggestions: [], stopped: false });
		expect(result.present!.openMinutes).toBe(0);
		expect(result.sunMinutes).toBeGreaterThan(0);
		const broken: PlaceWorker = () => Promise.reject(new Error('no such luck'));
		await expect(searchPlaces({ question, field, workers: [broken] })).rejects.toThrow(
			'no such luck'
		);
	});
});

const metresFrom = (x: number, y: number) => (one: Placement) => Math.hypot(one.x - x, one.y - y);

describe('its parts', () => {
	const area = placeQuestion(quarryTerrace()).area;

	it('climb to the summit, and along the edge where it lies outside', () => {
		const to = (x: number, y: number, bearingDeg: number) =>
			climb({
				from: { x: -5, y: 4, bearingDeg: 20 },
				area,
				lengthM: 4,
				middle: [0, 0],
				steps: { firstM: 2, firstDeg: 15, lastM: 0.1 },
				judge: (one) =>
					1000 - metresFrom(x, y)(one) ** 2 - Math.abs(one.bearingDeg - bearingDeg) / 5
			});
		const inside = to(6, -3, 70).placement;
		expect(metresFrom(6, -3)(inside)).toBeLessThan(0.3);
		expect(Math.abs(inside.bearingDeg - 70)).toBeLessThan(2);
		const outside = to(30, 3, 90).placement;
		expect(standsIn(area, outside, 4)).toBe(true);
		expect(outside.x).toBeGreaterThan(12.7);
		expect(Math.abs(outside.y - 3)).toBeLessThan(0.5);
	});

	it('clear what is near a better one', () => {
		const found = [
			{ placement: { x: 0, y: 0, bearingDeg: 0 }, minutes: 5 },
			{ placement: { x: 1, y: 0, bearingDeg: 0 }, minutes: 9 },
			{ placement: { x: 1, y: 0, bearingDeg: 178 }, minutes: 8 },
			{ placement: { x: 0, y: 9, bearingDeg: 0 }, minutes: 3 },
			{ placement: { x: 1, y: 0, bearingDeg: 90 }, minutes: 2 }
		];
		const kept = clearNiches(found, ({ minutes }) => minutes, nicheOf(8), 5);
		expect(kept.map(({ minutes }) => minutes)).toEqual([9, 3, 2]);
	});

	it('tell how flat it is: the worse of both ways', () => {
		// A tenth is lost with every metre east and nothing westwards; a hundredth with each degree.
		const judge = ({ x, y, bearingDeg }: Placement) =>
			1000 - 100 * Math.max(0, x) - 10 * Math.abs(y) - 10 * Math.abs(bearingDeg - 90);
		const { kept, leeway } = flatnessOf({ x: 0, y: 0, bearingDeg: 90 }, judge);
		expect(kept.along1M).toBeCloseTo(0.9, 9);
		expect(kept.across1M).toBeCloseTo(0.99, 9);
		expect(kept.turned5Deg).toBeCloseTo(0.95, 9);
		expect(leeway).toEqual({ alongM: 0.5, acrossM: 5, turnDeg: 5 });
		const none = flatnessOf({ x: 0, y: 0, bearingDeg: 90 }, () => 0);
		expect(none.leeway).toEqual({ alongM: 0, acrossM: 0, turnDeg: 0 });
	});

	it('measure flatness as the engine counts it, within two points', () => {
		const question = terraceQuestion(quarryTerrace(), {
			season: { from: '2027-04-15', to: '2027-05-15' }
		});
		const at = { x: -7.3, y: 4.3, bearingDeg: 8 };
		const { kept } = new PlaceWork(question).do({ kind: 'flatness', placement: at });
		const exact = flatnessOf(at, (one) => seasonMinutes(question, one));
		for (const way of ['along1M', 'across1M', 'turned5Deg'] as const) {
			expect(Math.abs(kept[way] - exact.kept[way])).toBeLessThan(0.02);
		}
	}, 60_000);
});
