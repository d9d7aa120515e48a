import { expect, test } from 'vitest';
import { createSite, stateAt } from '../../../src/lib/optics';
import {
	arcsFor,
	bandOf,
	litParts,
	medianArcDeg,
	middleEye,
	spotsOf,
	whyWords
} from '../../../src/lib/plan-table/seen';
import { dateOfDay, dayOfYear, instantOfTime, tableDay } from '../../../src/lib/plan-table/moment';
import { partsOf, withNewPart, withoutPart } from '../../../src/lib/plan-table/parts';
import { localClock } from '../../../src/lib/schedule';
import { quarryTerrace } from '../../support/plans';

const plan = quarryTerrace();
const site = createSite(plan);
const day = tableDay(plan.timeZone, '2027-03-18');

test('the middle of a window is open, with the engine’s arcs at the spots', () => {
	const band = bandOf(site, day, 0);
	const [window] = band.windows;
	const state = stateAt(site, (window!.startMs + window!.endMs) / 2);
	const heights = plan.zones[0]!.eyeHeights.length;
	const spots = spotsOf(state.zones[0]!, heights);
	expect(spots.length * heights).toBe(state.zones[0]!.eyes.length);
	expect(spots.flatMap(({ arcsDeg }) => arcsDeg)).toEqual(
		state.zones[0]!.eyes.map(({ arcDeg }) => arcDeg)
	);
	expect(whyWords(site, state, state.zones[0]!)).toMatch(/^Open: \d+ % of the eyes/);
	expect(medianArcDeg(state.zones[0]!, site.minimumArcDeg)).toBeGreaterThanOrEqual(45);
	const lit = litParts(arcsFor(site, middleEye(site, plan.zones[0]!, 0)!, state.sun));
	expect(lit.length).toBeGreaterThan(0);
	for (const { curtainIndex, startM, endM } of lit) {
		expect(startM).toBeGreaterThanOrEqual(-1e-6);
		expect(endM).toBeLessThanOrEqual(site.curtains[curtainIndex]!.widthM + 1e-6);
	}
});

test('at night nothing is lit and the reason is said', () => {
	const state = stateAt(site, day.startMs);
	expect(whyWords(site, state, state.zones[0]!)).toMatch(/the sun is down/);
	expect(arcsFor(site, site.zones[0]!.eyes[0]!, state.sun)).toEqual([]);
});

test('times of day are the wall clock’s, on days of 23 and 25 hours too', () => {
	const clock = localClock('Europe/Paris');
	const at = (date: string, time: string) => {
		const instant = instantOfTime(clock, tableDay('Europe/Paris', date), time);
		return instant === null ? null : new Date(instant).toISOString();
	};
	expect(at('2027-03-18', '09:20')).toBe('2027-03-18T08:20:00.000Z');
	expect(at('2027-03-28', '01:30')).toBe('2027-03-28T00:30:00.000Z');
	expect(at('2027-03-28', '09:20')).toBe('2027-03-28T07:20:00.000Z');
	expect(at('2027-10-31', '02:30')).toBe('2027-10-31T00:30:00.000Z');
	expect(at('2027-10-31', '09:20')).toBe('2027-10-31T08:20:00.000Z');
	expect(at('2027-03-18', '25:00')).toBeNull();
});

test('the days of a year', () => {
	expect(dayOfYear('2028-12-31')).toEqual({ day: 366, days: 366 });
	expect(dateOfDay('2027', 60)).toBe('2027-03-01');
});

test('a new part stands last of its kind, and can be taken out', () => {
	const { plan: more, ref } = withNewPart(plan, 'zones', [5, 9], [1, 2]);
	expect(more.zones[ref.index]!.outline[0]).toEqual([1, 2]);
	expect(partsOf(withoutPart(more, ref))).toEqual(partsOf(plan));
});
