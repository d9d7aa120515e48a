import { describe, expect, it } from 'vitest';
import { areaFault, coversZone, standsIn } from '../../../src/lib/place-search/area';
import { defaultArea } from '../../../src/lib/place-search/default-area';
import { AreaTable } from '../../../src/lib/place-search/desk/area-table.svelte';
import { PlaceForm } from '../../../src/lib/place-search/desk/place-form.svelte';
import {
	keptWords,
	leewayWords,
	partDone,
	stageWords
} from '../../../src/lib/place-search/desk/words';
import { workerCount } from '../../../src/lib/place-search/desk/worker-pool';
import { placementField } from '../../../src/lib/place-search/field';
import { withPlaced } from '../../../src/lib/place-search/placed';
import type { Ground } from '../../../src/lib/place-search/question';
import { curtain, fourByFour, quarryTerrace } from '../../support/plans';
import { createRandom, randomPlan, seedFor } from '../../support/random';

describe('the area that a search begins with', () => {
	it('holds a curtain, lies round the zone and leaves it free, in both hemispheres', () => {
		const seed = seedFor('default area', 31);
		const random = createRandom(seed);
		const plans = [
			quarryTerrace(),
			fourByFour(),
			...Array.from({ length: 20 }, () => randomPlan(random))
		];
		for (const plan of plans) {
			const area = defaultArea(plan, 0, 12);
			expect(areaFault(area)).toBeNull();
			const { outline } = plan.zones[0]!;
			expect(coversZone(area, outline), `seed ${seed}`).toBe(false);
			expect(coversZone(outline, outline)).toBe(true);
			expect(placementField(area, 12, 50)).toHaveLength(50);
			const middle = outline.reduce((sum, [, y]) => sum + y, 0) / outline.length;
			// A curtain stands across the side that is away from the noon sun.
			const far = plan.latitude >= 0 ? 8 : -8;
			const opposite = { x: 0, y: middle + far, bearingDeg: 90 };
			expect(standsIn(area, opposite, 12)).toBe(true);
		}
	});
});

const open = [{ from: '09:00', to: '17:00' }];
const programme = {
	id: 'p1',
	name: 'Daily',
	zone: 'Terrace',
	seasonFrom: '2027-05-01',
	seasonTo: '2027-09-30',
	openingHours: [open, open, open, open, open, [], []],
	daysOff: ['2027-06-01'],
	slotMinutes: 25,
	gapMinutes: 5,
	gridMinutes: 15,
	capacity: 9
};

function form(parts: Partial<ConstructorParameters<typeof PlaceForm>[0]> = {}) {
	const area: Ground[] = [
		[0, 0],
		[20, 0],
		[20, 20],
		[0, 20]
	];
	const plan = quarryTerrace();
	return new PlaceForm({
		plan,
		programmes: [programme],
		area: () => area,
		today: '2026-12-01',
		...parts
	});
}

describe('the fields of a search', () => {
	it('begin as the programme and the first curtain have it', () => {
		expect(form().question()).toMatchObject({
			zoneIndex: 0,
			replaces: 0,
			curtain: { lengthM: 16, bottomM: 0.3, topM: 6.5, dropDiameterUm: 420 },
			season: { from: '2027-05-01', to: '2027-09-30' },
			pattern: {
				lengthMinutes: 25,
				gapMinutes: 5,
				gridMinutes: 15,
				hours: { daysOff: ['2027-06-01'] }
			},
			capacity: 9
		});
	});

	it('begin with the light half of the year where nothing is sold yet', () => {
		const plan = { ...quarryTerrace(), curtains: [] };
		const north = form({ plan, programmes: [] }).question();
		expect(north).toMatchObject({
			replaces: null,
			season: { from: '2027-04-01', to: '2027-10-31' }
		});
		const south = form({ plan: { ...plan, latitude: -40 }, programmes: [] }).question();
		expect(south?.season).toEqual({ from: '2027-10-01', to: '2028-04-30' });
		// A programme of a zone that the plan has not is none.
		const other = form({ programmes: [{ ...programme, zone: 'Roof' }] });
		expect(other.choices.programme).toBeNull();
	});

	it.each([
		['lengthM', '0', 'The length must be above 0.'],
		['lengthM', '-3', 'The length must be above 0.'],
		['lengthM', '28.3', /28.2 m across at most/],
		['lengthM', 'long', 'Give a number.'],
		['topM', '0.3', 'The top must be above the bottom.'],
		['bottomM', '20000', /up to 10000/],
		['dropDiameterUm', '4', 'Give drops from 5 to 3000 µm.'],
		['seasonFrom', '', 'Give a date from 1900 to 2149.'],
		['seasonTo', '2027-04-30', 'The end is before the start.'],
		['seasonTo', '2031-09-30', /at most 1100 days/]
	] as const)('say at %s that %s is wrong', (field, typed, words) => {
		const typing = form();
		typing[field] = typed;
		expect(typing.faults[field]).toMatch(words);
		expect(typing.question()).toBeNull();
		expect(typing[field]).toBe(typed);
	});

	it('say that hours are needed on some day', () => {
		const typing = form({ programmes: [] });
		typing.choices.workdayHours = '';
		expect(typing.faults.workdayHours).toBeUndefined();
		typing.choices.weekendHours = '';
		expect(typing.faults.workdayHours).toMatch(/Open on one day/);
		typing.choices.weekendHours = '18:00-09:00';
		expect(typing.faultCount).toBe(1);
	});
});

describe('the free area on its table', () => {
	const square: Ground[] = [
		[0, 0],
		[9, 0],
		[9, 9],
		[0, 9]
	];
	const made = () => new AreaTable(quarryTerrace(), square, '2027-05-01');

	it('is one area: drawn anew it takes the place of the other, and is never taken away', () => {
		const table = made();
		table.add('zones', [20, 20], [26, 24]);
		expect(table.plan.zones).toHaveLength(1);
		expect(table.corners[0]).toEqual([20, 20]);
		expect(table.selected).toEqual({ kind: 'zones', index: 0 });
		table.undo();
		expect(table.corners).toEqual(square);
		table.remove();
		expect(table.corners).toEqual(square);
	});

	it('says what is wrong with it', () => {
		const table = made();
		expect(table.areaFault).toBeNull();
		table.setArea([square[0]!, square[2]!, square[1]!, square[3]!]);
		expect(table.areaFault).toMatch(/crosses/);
		table.setArea(square);
		table.untidy['zones[0].outline[0][0]'] = 'x';
		expect(table.areaFault).toMatch(/as numbers/);
	});
});

it('puts a curtain that was placed where it was, or last', () => {
	const plan = quarryTerrace();
	const placed = curtain([0, 10], [8, 10]);
	expect(withPlaced(plan, { index: 1, curtain: placed }).plan.curtains).toEqual([
		plan.curtains[0],
		placed
	]);
	const more = withPlaced(plan, { index: null, curtain: placed });
	expect(more.index).toBe(2);
	expect(more.plan.curtains).toEqual([...plan.curtains, placed]);
});

it('says how far it is and how flat', () => {
	expect(stageWords('field', 1200, 2400)).toBe('1,200 of 2,400 places judged');
	expect(partDone('field', 0, 2400)).toBe(0);
	expect(partDone('flatness', 5, 5)).toBeCloseTo(1, 9);
	const flatness = {
		kept: { along1M: 0.984, across1M: 0.9, turned5Deg: 0.912 },
		leeway: { alongM: 0, acrossM: 0.75, turnDeg: 30 }
	};
	expect(keptWords(flatness)).toBe(
		'Moved by a metre it keeps 98 % along itself and 90 % across; turned by 5° 91 %.'
	);
	expect(leewayWords(flatness).map(({ within }) => within)).toEqual([
		'under 0.1 m',
		'0.75 m',
		'30° and more'
	]);
});

it('takes as many workers as there are cores, up to four', () => {
	expect([undefined, 1, 2, 16].map(workerCount)).toEqual([1, 1, 2, 4]);
});
