import { describe, expect, it } from 'vitest';
import {
	layOutSlots,
	localClock,
	localDayRange,
	openIntervals,
	parseInstant,
	parseTimeOfDay,
	uncoveredBow,
	isTimeZone,
	type OpeningHours,
	type SlotPattern
} from '../../../src/lib/schedule';
import { createRandom } from '../../support/random';

const everyDay = (from: string, to: string): OpeningHours => ({
	weekdays: Array.from({ length: 7 }, () => [
		{ fromMinute: parseTimeOfDay(from), toMinute: parseTimeOfDay(to) }
	]),
	daysOff: []
});
const at = (text: string) => Date.parse(text);
const span = (start: string, end: string) => ({ startMs: at(start), endMs: at(end) });
const texts = (slots: readonly { startMs: number; endMs: number }[]) =>
	slots.map(({ startMs, endMs }) => [
		new Date(startMs).toISOString().slice(5, 16),
		new Date(endMs).toISOString().slice(11, 16)
	]);
const pattern = (parts: Partial<SlotPattern> = {}): SlotPattern => ({
	lengthMinutes: 20,
	gapMinutes: 5,
	gridMinutes: 10,
	hours: everyDay('00:00', '24:00'),
	...parts
});

describe('slots', () => {
	it('are laid greedily on the grid, with the gap, inside the window', () => {
		const windows = [span('2027-03-01T08:03:12Z', '2027-03-01T09:31:00Z')];
		const slots = layOutSlots({ windows, pattern: pattern(), clock: localClock('UTC') });
		expect(texts(slots)).toEqual([
			['03-01T08:10', '08:30'],
			['03-01T08:40', '09:00'],
			['03-01T09:10', '09:30']
		]);
		expect(slots.every(({ date }) => date === '2027-03-01')).toBe(true);
	});

	it('may end with the window to the second and may not pass it', () => {
		const exact = layOutSlots({
			windows: [span('2027-03-01T08:00:00Z', '2027-03-01T08:20:00Z')],
			pattern: pattern(),
			clock: localClock('UTC')
		});
		expect(exact.length).toBe(1);
		const short = layOutSlots({
			windows: [span('2027-03-01T08:00:00Z', '2027-03-01T08:19:59Z')],
			pattern: pattern(),
			clock: localClock('UTC')
		});
		expect(short).toEqual([]);
	});

	it('keep the gap from one window to the next', () => {
		const windows = [
			span('2027-03-01T08:00:00Z', '2027-03-01T08:20:00Z'),
			span('2027-03-01T08:22:00Z', '2027-03-01T09:00:00Z')
		];
		const slots = layOutSlots({
			windows,
			pattern: pattern({ gridMinutes: 1 }),
			clock: localClock('UTC')
		});
		expect(texts(slots)).toEqual([
			['03-01T08:00', '08:20'],
			['03-01T08:25', '08:45']
		]);
	});

	it('start a grid that does not divide the hour afresh at the hour', () => {
		const windows = [span('2027-03-01T08:00:00Z', '2027-03-01T09:40:00Z')];
		const slots = layOutSlots({
			windows,
			pattern: pattern({ gridMinutes: 25, lengthMinutes: 8, gapMinutes: 0 }),
			clock: localClock('UTC')
		});
		expect(texts(slots).map(([start]) => start)).toEqual([
			'03-01T08:00',
			'03-01T08:25',
			'03-01T08:50',
			'03-01T09:00',
			'03-01T09:25'
		]);
	});

	it('count the grid from the local hour where the clock stands off by 45 minutes', () => {
		// Asia/Kathmandu is UTC+5:45.
		const windows = [span('2027-03-01T03:01:00Z', '2027-03-01T04:00:00Z')];
		const slots = layOutSlots({
			windows,
			pattern: pattern({ gridMinutes: 60 }),
			clock: localClock('Asia/Kathmandu')
		});
		expect(texts(slots)).toEqual([['03-01T03:15', '03:35']]);
	});

	it('stay inside opening hours, by weekday and without days off', () => {
		const hours = everyDay('10:00', '11:00');
		// Monday 1 March 2027 closed, Tuesday as usual, Wednesday a day off.
		const weekdays = hours.weekdays.map((spans, day) => (day === 0 ? [] : spans));
		const windows = [1, 2, 3, 4].map((day) =>
			span(`2027-03-0${day}T06:00:00Z`, `2027-03-0${day}T15:00:00Z`)
		);
		const slots = layOutSlots({
			windows,
			pattern: pattern({ hours: { weekdays, daysOff: ['2027-03-03'] } }),
			clock: localClock('Europe/Paris')
		});
		expect(texts(slots)).toEqual([
			['03-02T09:00', '09:20'],
			['03-02T09:30', '09:50'],
			['03-04T09:00', '09:20'],
			['03-04T09:30', '09:50']
		]);
	});

	it('keep to the wall clock on days when it changes', () => {
		// Paris, 28 March 2027: 02:00 becomes 03:00 at 01:00 UTC; 31 October: 03:00 becomes 02:00 at 01:00 UTC.
		const spring = layOutSlots({
			windows: [span('2027-03-28T00:30:00Z', '2027-03-28T01:40:00Z')],
			pattern: pattern({
				gridMinutes: 30,
				lengthMinutes: 30,
				gapMinutes: 0,
				hours: everyDay('02:30', '12:00')
			}),
			clock: localClock('Europe/Paris')
		});
		expect(texts(spring)).toEqual([['03-28T01:00', '01:30']]);
		const autumn = layOutSlots({
			windows: [span('2027-10-31T00:00:00Z', '2027-10-31T02:10:00Z')],
			pattern: pattern({
				gridMinutes: 30,
				lengthMinutes: 30,
				gapMinutes: 0,
				hours: everyDay('02:30', '12:00')
			}),
			clock: localClock('Europe/Paris')
		});
		// 02:30 comes twice; between, from 02:00 to 02:30 the second time, it is closed again.
		expect(texts(autumn)).toEqual([
			['10-31T00:30', '01:00'],
			['10-31T01:30', '02:00']
		]);
	});

	it('run over midnight where the hours of two days meet', () => {
		const windows = [span('2027-06-20T21:30:00Z', '2027-06-20T22:30:00Z')];
		const slots = layOutSlots({
			windows,
			pattern: pattern({ gridMinutes: 60, lengthMinutes: 30 }),
			clock: localClock('UTC')
		});
		expect(texts(slots)).toEqual([['06-20T22:00', '22:30']]);
		const over = layOutSlots({
			windows: [span('2027-06-20T23:50:00Z', '2027-06-21T00:30:00Z')],
			pattern: pattern({ gridMinutes: 10, lengthMinutes: 30 }),
			clock: localClock('UTC')
		});
		expect(texts(over)).toEqual([['06-20T23:50', '00:20']]);
		expect(over[0]!.date).toBe('2027-06-20');
	});

	it('never overlap and never leave window or hours, at random', () => {
		const seed = 8;
		console.log(`slots: seed ${seed}`);
		const random = createRandom(seed);
		const clock = localClock('Europe/Paris');
		for (let k = 0; k < 300; k++) {
			let t = at('2027-10-30T00:00:00Z');
			const windows = Array.from({ length: 6 }, () => {
				const startMs = t + Math.floor(random() * 8 * 3600) * 1000;
				t = startMs + Math.floor(random() * 6 * 3600 + 60) * 1000;
				return { startMs, endMs: t };
			});
			const p = pattern({
				lengthMinutes: 1 + Math.floor(random() * 60),
				gapMinutes: Math.floor(random() * 20),
				gridMinutes: 1 + Math.floor(random() * 60),
				hours: everyDay('01:30', '17:10')
			});
			const slots = layOutSlots({ windows, pattern: p, clock });
			slots.forEach((slot, i) => {
				const local = (slot.startMs + clock.offsetMsAt(slot.startMs)) % 3_600_000;
				expect(local % (p.gridMinutes * 60_000)).toBe(0);
				expect(windows.some((w) => w.startMs <= slot.startMs && slot.endMs <= w.endMs)).toBe(true);
				if (i > 0)
					expect(slot.startMs - slots[i - 1]!.endMs).toBeGreaterThanOrEqual(p.gapMinutes * 60_000);
			});
			const { minutes } = uncoveredBow({ windows, slots });
			const bow = windows.reduce((sum, w) => sum + w.endMs - w.startMs, 0) / 60_000;
			expect(minutes).toBeCloseTo(bow - slots.length * p.lengthMinutes, 6);
		}
	});

	it('refuse a wrong pattern', () => {
		const lay = (parts: Partial<SlotPattern>) => () =>
			layOutSlots({ windows: [], pattern: pattern(parts), clock: localClock('UTC') });
		expect(lay({ lengthMinutes: 0 })).toThrow(RangeError);
		expect(lay({ lengthMinutes: NaN })).toThrow(RangeError);
		expect(lay({ gapMinutes: -1 })).toThrow(RangeError);
		expect(lay({ gridMinutes: 0 })).toThrow(RangeError);
		expect(lay({ gridMinutes: 7.5 })).toThrow(RangeError);
		const bad = {
			weekdays: [[{ fromMinute: 600, toMinute: 500 }], [], [], [], [], [], []],
			daysOff: []
		};
		expect(() =>
			openIntervals({ clock: localClock('UTC'), hours: bad, startMs: 0, endMs: 1 })
		).toThrow(RangeError);
	});
});

describe('uncovered bow', () => {
	it('names the parts between and around the slots', () => {
		const { parts, minutes } = uncoveredBow({
			windows: [
				span('2027-03-01T08:00:00Z', '2027-03-01T09:00:00Z'),
				span('2027-03-02T08:00:00Z', '2027-03-02T08:01:00Z')
			],
			slots: [
				span('2027-03-01T08:10:00Z', '2027-03-01T08:30:00Z'),
				span('2027-03-01T08:35:00Z', '2027-03-01T08:55:00Z')
			]
		});
		expect(texts(parts)).toEqual([
			['03-01T08:00', '08:10'],
			['03-01T08:30', '08:35'],
			['03-01T08:55', '09:00'],
			['03-02T08:00', '08:01']
		]);
		expect(minutes).toBe(21);
	});
});

describe('local days', () => {
	it('have 23, 24 or 25 hours', () => {
		const hours = (date: string, timeZone = 'Europe/Paris') => {
			const { startMs, endMs } = localDayRange({ timeZone, from: date, to: date });
			return (endMs - startMs) / 3_600_000;
		};
		expect(hours('2027-03-28')).toBe(23);
		expect(hours('2027-10-31')).toBe(25);
		expect(hours('2027-07-01')).toBe(24);
		// IANA tz: Sao Paulo skipped the midnight of 4 November 2018; Samoa skipped 30 December 2011.
		expect(hours('2018-11-04', 'America/Sao_Paulo')).toBe(23);
		expect(hours('2011-12-30', 'Pacific/Apia')).toBe(0);
	});

	it('know zones by name alone', () => {
		expect(isTimeZone('Europe/Paris')).toBe(true);
		expect(isTimeZone('UTC')).toBe(true);
		expect(isTimeZone('+02:00')).toBe(false);
		expect(isTimeZone('Mars/Olympus')).toBe(false);
		expect(isTimeZone('')).toBe(false);
		expect(() => localClock('Mars/Olympus')).toThrow(RangeError);
	});

	it('date instants by the clock of the place, in any order of asking', () => {
		const clock = localClock('America/New_York');
		expect(clock.dateAt(at('2027-07-01T03:59:59Z'))).toBe('2027-06-30');
		expect(clock.dateAt(at('2027-01-01T04:59:59Z'))).toBe('2026-12-31');
		expect(clock.dateAt(at('2027-07-01T04:00:00Z'))).toBe('2027-07-01');
		expect(clock.dateAt(at('2027-01-01T05:00:00Z'))).toBe('2027-01-01');
	});

	it('read instants and times, and refuse what is none', () => {
		expect(parseInstant('2027-03-01T08:30:00Z')).toBe(at('2027-03-01T08:30:00Z'));
		expect(parseInstant('2027-03-01T09:30:00+01:00')).toBe(at('2027-03-01T08:30:00Z'));
		for (const text of [
			'2027-03-01',
			'2027-03-01T08:30:00',
			'now',
			'',
			'2027-02-30T00:00:00Z',
			'1700-01-01T00:00:00Z'
		]) {
			expect(() => parseInstant(text)).toThrow(RangeError);
		}
		expect(parseTimeOfDay('24:00')).toBe(1440);
		for (const text of ['24:01', '9:00', '12:60', 'noon'])
			expect(() => parseTimeOfDay(text)).toThrow(RangeError);
	});
});
