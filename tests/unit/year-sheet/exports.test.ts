import { describe, expect, it } from 'vitest';
import type { BowWindow } from '../../../src/lib/optics';
import { localClock } from '../../../src/lib/schedule';
import { windowsCalendar } from '../../../src/lib/year-sheet/export-calendar';
import { sheetSvg } from '../../../src/lib/year-sheet/export-picture';
import { fileName, localInstant, windowsCsv } from '../../../src/lib/year-sheet/export-tables';
import { intervalsPath, sheetGround, windowPaths } from '../../../src/lib/year-sheet/sheet';

const clock = localClock('Europe/Paris');
const window = (start: string, end: string): BowWindow => ({
	date: start.slice(0, 10),
	startMs: Date.parse(start),
	endMs: Date.parse(end),
	peakShare: 0.8125,
	peakArcDeg: 101.23456789
});
const of = { site: 'Quarry & terrace', zone: 'Höhe', year: 2027, plan: 'version 3' };
const place = { latitudeDeg: 45.9312, longitudeDeg: 6.8745 };
const morning = window('2027-03-28T07:12:05Z', '2027-03-28T08:00:25Z');

describe('exports', () => {
	it('have plain file names with site and year', () => {
		expect(fileName(of, 'csv')).toBe('quarry-terrace_hohe_2027_version-3.csv');
		expect(fileName({ ...of, site: '..//' }, 'png')).toBe('site_hohe_2027_version-3.png');
	});

	it('write local instants with the distance from UTC that holds', () => {
		expect(localInstant(clock, Date.parse('2027-03-28T00:59:59Z'))).toBe(
			'2027-03-28T01:59:59+01:00'
		);
		expect(localInstant(clock, Date.parse('2027-03-28T01:00:00Z'))).toBe(
			'2027-03-28T03:00:00+02:00'
		);
		expect(localInstant(localClock('America/St_Johns'), Date.parse('2027-01-01T00:00:00Z'))).toBe(
			'2026-12-31T20:30:00-03:30'
		);
	});

	it('say in CSV exactly what was found', () => {
		expect(windowsCsv([morning], clock)).toBe(
			'date,start_local,end_local,start_utc,end_utc,minutes,peak_share,peak_arc_deg\r\n' +
				'2027-03-28,2027-03-28T09:12:05+02:00,2027-03-28T10:00:25+02:00,2027-03-28T07:12:05Z,' +
				`2027-03-28T08:00:25Z,${2900 / 60},0.8125,101.23456789\r\n`
		);
	});

	it('make a calendar with times in UTC', () => {
		const text = windowsCalendar({
			of,
			windows: [morning],
			host: 'example.org',
			stampedAt: new Date('2026-12-01T00:00:00Z'),
			place
		});
		expect(text).toMatch(/^BEGIN:VCALENDAR\r\nVERSION:2\.0\r\n/);
		expect(text).toContain('DTSTART:20270328T071205Z\r\n');
		expect(text).toContain('DTEND:20270328T080025Z\r\n');
		expect(text).toContain('DTSTAMP:20261201T000000Z\r\n');
		expect(text).toContain('SUMMARY:Bow\\, Höhe\r\n');
		// Lines have at most 75 octets (RFC 5545, 3.1).
		for (const line of text.split('\r\n')) {
			expect(Buffer.byteLength(line)).toBeLessThanOrEqual(75);
		}
	});
});

describe('the drawing', () => {
	const hours = {
		weekdays: Array.from({ length: 7 }, () => [{ fromMinute: 540, toMinute: 600 }]),
		daysOff: []
	};
	const ground = sheetGround({
		year: 2027,
		place: { ...place, clock },
		hours,
		season: { from: '2026-12-01', to: '2027-03-31' }
	});

	it('has rows, months, both changes of the clock and the frame of the season', () => {
		expect(ground.days).toBe(365);
		expect(ground.months.map(({ row }) => row)).toEqual([
			0, 31, 59, 90, 120, 151, 181, 212, 243, 273, 304, 334
		]);
		expect(ground.changes.map(({ row, forwardMinutes }) => [row, forwardMinutes])).toEqual([
			[86, 60],
			[303, -60]
		]);
		expect(ground.frames).toEqual([{ fromMinute: 540, toMinute: 600, firstRow: 0, endRow: 90 }]);
		// From before the earliest sunrise (5:43 in June) to after the latest sunset (21:31).
		expect([ground.fromHour, ground.toHour]).toEqual([5, 22]);
	});

	it('parts a window at the ends of the opening hours, on the wall clock', () => {
		const paths = windowPaths({
			ground,
			clock,
			windows: [window('2027-03-28T06:30:00Z', '2027-03-28T07:30:00Z')],
			hours,
			season: null,
			colourBy: 'share',
			minimumShare: 0.625
		});
		// Half-way from the least share to all: half-way from straw to amber.
		expect(paths).toEqual([
			{ colour: '#e6b963', open: true, d: 'M540 86H570v1H540z' },
			{ colour: '#e6b963', open: false, d: 'M510 86H540v1H510z' }
		]);
	});

	it('paints the shades of a window, those of one colour together', () => {
		const start = Date.parse('2027-03-28T07:00:00Z');
		const minute = (at: number) => start + at * 60_000;
		const shade = (from: number, to: number, share: number) => ({
			startMs: minute(from),
			endMs: minute(to),
			share,
			arcDeg: 60
		});
		const paths = windowPaths({
			ground,
			clock,
			windows: [window('2027-03-28T07:00:00Z', '2027-03-28T07:30:00Z')],
			shades: [[shade(0, 10, 0.5), shade(10, 20, 1), shade(20, 30, 0.999)]],
			hours,
			season: null,
			colourBy: 'share',
			minimumShare: 0.5
		});
		expect(paths).toEqual([
			{ colour: '#f4e7bf', open: true, d: 'M540 86H550v1H540z' },
			{ colour: '#d88a06', open: true, d: 'M550 86H570v1H550z' }
		]);
	});

	it('makes an SVG by itself, with its words escaped', () => {
		const svg = sheetSvg({
			title: 'Quarry & <terrace>',
			under: '2027',
			ground,
			daylight: intervalsPath(ground, clock, [morning]),
			windows: []
		});
		expect(svg).toContain('<title>Quarry &amp; &lt;terrace></title>');
		expect(svg).toContain('28 Mar 2027: clocks forward 60 min');
		expect(svg).toContain('d="M552.083 86H600.417v1H552.083z"');
	});
});
