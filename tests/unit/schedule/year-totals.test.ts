import { describe, expect, it } from 'vitest';
import {
	clockChanges,
	localClock,
	totalsDifference,
	wallParts,
	yearTotals,
	type OpeningHours
} from '../../../src/lib/schedule';

const at = (text: string) => Date.parse(text);
const hours = (fromMinute: number, toMinute: number): OpeningHours => ({
	weekdays: Array.from({ length: 7 }, () => [{ fromMinute, toMinute }]),
	daysOff: []
});
const pattern = (opening: OpeningHours) => ({
	lengthMinutes: 20,
	gapMinutes: 10,
	gridMinutes: 10,
	hours: opening
});
/** A window with the local date of its start in Paris. */
const window = (start: string, end: string) => ({
	date: localClock('Europe/Paris').dateAt(at(start)),
	startMs: at(start),
	endMs: at(end)
});
const clock = localClock('Europe/Paris');

describe('wall parts', () => {
	it('are cut at midnight', () => {
		const parts = wallParts(clock, window('2027-01-31T22:30:00Z', '2027-01-31T23:15:30Z'));
		expect(parts.map(({ date, fromMinute, toMinute }) => [date, fromMinute, toMinute])).toEqual([
			['2027-01-31', 1410, 1440],
			['2027-02-01', 0, 15.5]
		]);
	});

	it('leave out the hour that the clock skips and keep both of the one that comes twice', () => {
		// Paris: 02:00 becomes 03:00 at 01:00 UTC on 28 March 2027, and 03:00 becomes 02:00 at 01:00 UTC on
		// 31 October 2027 (Directive 2000/84/EC: the last Sundays of March and October, 01:00 UTC).
		const spring = wallParts(clock, window('2027-03-28T00:30:00Z', '2027-03-28T01:30:00Z'));
		expect(spring.map(({ fromMinute, toMinute }) => [fromMinute, toMinute])).toEqual([
			[90, 120],
			[180, 210]
		]);
		const autumn = wallParts(clock, window('2027-10-31T00:30:00Z', '2027-10-31T01:30:00Z'));
		expect(autumn.map(({ fromMinute, toMinute }) => [fromMinute, toMinute])).toEqual([
			[150, 180],
			[120, 150]
		]);
	});

	it('and the changes are known', () => {
		const year = { startMs: at('2026-12-31T23:00:00Z'), endMs: at('2027-12-31T23:00:00Z') };
		expect(clockChanges(clock, year)).toEqual([
			{ atMs: at('2027-03-28T01:00:00Z'), date: '2027-03-28', forwardMinutes: 60 },
			{ atMs: at('2027-10-31T01:00:00Z'), date: '2027-10-31', forwardMinutes: -60 }
		]);
		expect(clockChanges(localClock('UTC'), year)).toEqual([]);
	});
});

describe('totals of a year', () => {
	const of = (windows: ReturnType<typeof window>[], opening = hours(540, 600), season?: string) =>
		yearTotals({
			year: 2027,
			windows,
			clock,
			pattern: pattern(opening),
			capacity: 12,
			season: season ? { from: '2027-01-01', to: season } : null
		});
	const month = (totals: ReturnType<typeof of>, name: string) =>
		totals.months.find((one) => one.month === name);

	it('count minutes, those inside hours, slots and places', () => {
		// 08:45:30 to 10:05 local, open 9 to 10: slots at 9:00 and 9:30.
		const totals = of([window('2027-02-10T07:45:30Z', '2027-02-10T09:05:00Z')]);
		expect(month(totals, '2027-02')).toEqual({
			month: '2027-02',
			bowMinutes: 79.5,
			openMinutes: 60,
			slots: 2,
			places: 24
		});
		expect(totals.year).toEqual({ bowMinutes: 79.5, openMinutes: 60, slots: 2, places: 24 });
		expect(totals.months.length).toBe(12);
		expect(totals.laidSlots.map(({ startMs }) => startMs)).toEqual([
			at('2027-02-10T08:00:00Z'),
			at('2027-02-10T08:30:00Z')
		]);
	});

	it('part a window at the end of a month, and leave out what lies past the year', () => {
		const totals = of(
			[
				window('2027-01-31T22:00:00Z', '2027-01-31T23:40:00Z'),
				window('2027-12-31T22:40:00Z', '2027-12-31T23:40:00Z')
			],
			hours(0, 1440)
		);
		// 23:00 to 24:00 and 0:00 to 0:40; slots at 23:00, 23:30, and at 0:00 in February.
		expect(month(totals, '2027-01')).toMatchObject({ bowMinutes: 60, openMinutes: 60, slots: 2 });
		expect(month(totals, '2027-02')).toMatchObject({ bowMinutes: 40, slots: 1 });
		// 23:40 to 24:00: the slot at 23:40 fits; the one at 0:10 is of the next year.
		expect(month(totals, '2027-12')).toMatchObject({ bowMinutes: 20, openMinutes: 20, slots: 1 });
		expect(totals.year.slots).toBe(4);
	});

	it('count the minutes that pass on the days when the clock changes', () => {
		// One hour and a half passes from 1:30 to 4:00 on the day of 23 hours: open 2 to 4 is 3 to 4 alone.
		const spring = of([window('2027-03-28T00:30:00Z', '2027-03-28T02:00:00Z')], hours(120, 240));
		expect(month(spring, '2027-03')).toMatchObject({ bowMinutes: 90, openMinutes: 60, slots: 2 });
		// From the first 2:00 to the second 3:00 two hours pass, and 2 to 3 is open both times.
		const autumn = of([window('2027-10-31T00:00:00Z', '2027-10-31T02:00:00Z')], hours(120, 180));
		expect(month(autumn, '2027-10')).toMatchObject({ bowMinutes: 120, openMinutes: 120, slots: 4 });
	});

	it('open and sell nothing out of season or on days off', () => {
		const windows = [
			window('2027-02-10T08:00:00Z', '2027-02-10T09:00:00Z'),
			window('2027-02-11T08:00:00Z', '2027-02-11T09:00:00Z')
		];
		expect(of(windows, hours(540, 600), '2027-02-10').year).toEqual({
			bowMinutes: 120,
			openMinutes: 60,
			slots: 2,
			places: 24
		});
		const off = { ...hours(540, 600), daysOff: ['2027-02-10', '2027-02-11'] };
		expect(of(windows, off).year).toMatchObject({ openMinutes: 0, slots: 0, places: 0 });
	});

	it('are compared by what one has more than the other', () => {
		const more = { bowMinutes: 10, openMinutes: 5, slots: 2, places: 24 };
		const less = { bowMinutes: 4, openMinutes: 6, slots: 2, places: 0 };
		expect(totalsDifference(more, less)).toEqual({
			bowMinutes: 6,
			openMinutes: -1,
			slots: 0,
			places: 24
		});
	});
});
