import { expect, it } from 'vitest';
import { createSite, daylight, findWindows, type BowWindow } from '../../../src/lib/optics';
import { yearInterval } from '../../../src/lib/year-sheet/sheet';
import { shadesOf, siteOfZone, yearPieces } from '../../../src/lib/year-sheet/year-pieces';
import { readPlan } from '../../../src/lib/schemas/plan';
import quarry from '../../fixtures/quarry-terrace.json';

const read = readPlan(quarry);
if (!read.ok) throw new Error('the fixture is no plan');
const plan = read.plan;

it('a year in pieces is the year, begins with a single day and can be stopped', async () => {
	const windows: BowWindow[] = [];
	const lit: { startMs: number; endMs: number }[] = [];
	const counts: number[] = [];
	for await (const piece of yearPieces({ site: siteOfZone(plan, 0), year: 2028 })) {
		windows.push(...piece.windows);
		lit.push(...piece.daylight);
		counts.push(piece.daysDone);
		expect(piece.daysInAll).toBe(366);
	}
	expect(counts.slice(0, 6)).toEqual([1, 2, 4, 7, 14, 21]);
	expect(counts.at(-1)).toBe(366);
	const site = createSite(plan);
	expect(windows).toEqual(findWindows({ site, from: '2028-01-01', to: '2028-12-31' })[0]?.windows);
	expect(lit.length).toBe(daylight({ ...site, ...yearInterval(2028, 'Europe/Paris') }).length);

	const stop = new AbortController();
	const seen: number[] = [];
	await expect(async () => {
		for await (const { daysDone } of yearPieces({
			site: siteOfZone(plan, 0),
			year: 2028,
			signal: stop.signal
		})) {
			seen.push(daysDone);
			if (daysDone === 14) stop.abort();
		}
	}).rejects.toThrow();
	expect(seen.at(-1)).toBe(14);
});

it('a window is shaded in parts of ten minutes that are the window and show no more than its peaks', () => {
	const site = siteOfZone(plan, 0);
	const [window] = findWindows({ site, from: '2028-03-02', to: '2028-03-02' })[0]!.windows;
	const shades = shadesOf(site, window!);
	expect(shades[0]?.startMs).toBe(window!.startMs);
	expect(shades.at(-1)?.endMs).toBe(window!.endMs);
	for (const [i, { startMs, endMs, share, arcDeg }] of shades.entries()) {
		if (i > 0) expect(startMs).toBe(shades[i - 1]?.endMs);
		expect(endMs - startMs).toBeLessThanOrEqual(600_000);
		expect(share).toBeGreaterThanOrEqual(site.minimumShare);
		expect(share).toBeLessThanOrEqual(window!.peakShare);
		expect(arcDeg).toBeGreaterThanOrEqual(site.minimumArcDeg);
		expect(arcDeg).toBeLessThanOrEqual(window!.peakArcDeg + 1e-6);
	}
});
