import { expect, test } from 'vitest';
import { createSite, findWindows, type Site } from '../../../src/lib/optics/index.ts';
import { addDays, localDayRange } from '../../../src/lib/schedule/index.ts';
import { windowsOn } from '../../../src/lib/server/sites/windows-on.ts';
import { barePlan, curtain, fourByFour, quarryTerrace } from '../../support/plans.ts';

/** The windows in which a slot of a date can lie: those of a long range that reach into the date. */
function expected(site: Site, date: string, daysBack: number) {
	const { timeZone } = site.clock;
	const { startMs } = localDayRange({ timeZone, from: date, to: date });
	return findWindows({ site, from: addDays(date, -daysBack), to: date }).map(
		({ zone, windows }) => ({
			zone,
			windows: windows.filter(({ endMs }) => endMs > startMs)
		})
	);
}

test.each([
	['the example', quarryTerrace()],
	['four curtains and four walls', fourByFour()]
])('single dates of %s have the windows that a long range has', async (_, body) => {
	const site = createSite(body);
	const dates = ['2027-03-27', '2027-03-28', '2027-10-31'];
	const found = await windowsOn(body, dates);
	let windowsSeen = 0;
	for (const date of dates) {
		for (const { zone, windows } of expected(site, date, 1)) {
			expect(found.hasZone(zone)).toBe(true);
			const own = found.of(zone, date)!;
			windowsSeen += windows.length;
			expect(own.filter((one) => windows.some(({ startMs }) => startMs === one.startMs))).toEqual(
				windows
			);
		}
		expect(found.of('No such zone', date)).toEqual([]);
	}
	expect(windowsSeen).toBeGreaterThan(0);
	expect(found.hasZone('No such zone')).toBe(false);
	expect(found.of('Terrace', '2027-05-01')).toBeNull();
});

test('a window that no midnight closed for days is found from a date in its middle', async () => {
	// Curtains all round under a midnight sun: the bow goes round with it.
	const around = Array.from({ length: 12 }, (_, i) => {
		const point = (k: number): [number, number] => [
			12 * Math.sin((k * Math.PI) / 6),
			12 * Math.cos((k * Math.PI) / 6)
		];
		return curtain(point(i), point(i + 1), { name: `Curtain ${i + 1}`, bottom: -4, top: 14 });
	});
	const body = barePlan({ latitude: 78, longitude: 15, curtains: around });
	const date = '2027-06-21';
	const [wanted] = expected(createSite(body), date, 60);
	const long = wanted!.windows.filter(({ endMs, startMs }) => endMs - startMs > 3 * 86_400_000);
	expect(long.length).toBeGreaterThan(0);
	const found = (await windowsOn(body, [date])).of(wanted!.zone, date)!;
	for (const { startMs, endMs } of long) {
		expect(found).toContainEqual(expect.objectContaining({ startMs, endMs }));
	}
});
