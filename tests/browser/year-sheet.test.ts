import { readFileSync } from 'node:fs';
import { createSite, findWindows, type BowWindow } from '../../src/lib/optics/index.ts';
import { localClock, yearTotals } from '../../src/lib/schedule/index.ts';
import type { Plan } from '../../src/lib/schemas/plan.ts';
import { windowsCsv } from '../../src/lib/year-sheet/export-tables.ts';
import { expect, expectAccessible, openDesk, test, type Page } from './helpers.ts';

/** The year sheet against the engine run here, with the same plan, hours and slots. */

const year = 2027;
const span = (fromMinute: number, toMinute: number) => [{ fromMinute, toMinute }];
const workday = span(540, 720);
const weekend = span(600, 690);
const pattern = {
	lengthMinutes: 20,
	gapMinutes: 10,
	gridMinutes: 10,
	hours: {
		weekdays: [workday, workday, workday, workday, workday, weekend, weekend],
		daysOff: []
	}
};

function engine(plan: Plan) {
	const site = createSite(plan);
	const windows: readonly BowWindow[] =
		findWindows({ site, from: `${year}-01-01`, to: `${year}-12-31` })[0]?.windows ?? [];
	const { clock } = site;
	return {
		windows,
		clock,
		totals: yearTotals({ year, windows, clock, pattern, capacity: 8, season: null })
	};
}

const rowOf = (page: Page, name: string) => page.getByRole('row').filter({ hasText: name });
const number = (value: number) => Math.round(value).toLocaleString('en-GB');
const signed = (value: number) =>
	value === 0 ? '0' : `${value > 0 ? '+' : '−'}${number(Math.abs(value))}`;

async function saved(page: Page, name: string): Promise<{ file: string; text: string }> {
	const download = page.waitForEvent('download');
	await page
		.getByRole('region', { name: /^Save version/ })
		.getByRole('button', { name })
		.click();
	const one = await download;
	return { file: one.suggestedFilename(), text: readFileSync(await one.path(), 'utf8') };
}

test('a planner reads, walks, saves and compares a year', async ({ page }) => {
	test.slow();
	await openDesk(page, 'planner');
	const address = `${page.url()}/sites/quarry-terrace`;
	const plan = (await (await page.request.get(`${address}/plan/1/plan.json`)).json()) as Plan;
	const expected = engine(plan);

	await page.goto(address);
	await page.getByRole('link', { name: 'Year sheet' }).click();
	await expect(page.getByRole('heading', { level: 1 })).toHaveText('Year sheet');
	await page.getByLabel('Year', { exact: true }).fill(String(year));
	await page.getByLabel('Opening hours of').selectOption('typed');
	await page.getByLabel('Monday to Friday').fill('09:00-12:00');
	await page.getByLabel('Saturday and Sunday').fill('10:00-11:30');
	await page.getByLabel('Places in a slot').fill('8');

	await test.step('totals are those of the engine', async () => {
		await expect(page.getByText('All 365 days computed.')).toBeVisible();
		for (const { month, ...sum } of expected.totals.months) {
			const name = new Date(`${month}-01`).toLocaleDateString('en-GB', { month: 'long' });
			await expect(rowOf(page, name).getByRole('cell')).toHaveText(
				[sum.bowMinutes, sum.openMinutes, sum.slots, sum.places].map(number)
			);
		}
		const all = expected.totals.year;
		await expect(rowOf(page, 'Year').getByRole('cell')).toHaveText(
			[all.bowMinutes, all.openMinutes, all.slots, all.places].map(number)
		);
	});

	// From here on nothing is asked of the server.
	const asked: string[] = [];
	page.on('request', (request) => {
		const { protocol, pathname } = new URL(request.url());
		// The browser asks for the page's icon anew when the address changes.
		if (protocol !== 'blob:' && pathname !== '/mark.svg') asked.push(pathname);
	});

	await test.step('keys move the day, and a click goes to one', async () => {
		const sheet = page.getByRole('slider');
		await sheet.focus();
		await sheet.press('Home');
		await sheet.press('PageDown');
		await sheet.press('PageDown');
		await sheet.press('ArrowDown');
		const day = page.getByRole('region', { name: 'Tuesday 2 March' });
		await expect(day).toBeVisible();
		const [found] = expected.windows.filter(({ date }) => date === `${year}-03-02`);
		const time = (ms: number) =>
			new Date(ms).toLocaleTimeString('en-GB', {
				hour: '2-digit',
				minute: '2-digit',
				timeZone: plan.timeZone
			});
		await expect(day).toContainText(`${time(found!.startMs)}–${time(found!.endMs)}`);
		await expect(day).toContainText(`${Math.round(found!.peakArcDeg)}° of arc`);
		await expect(sheet).toHaveAttribute('aria-valuetext', /^Tuesday 2 March: bow from/);
		await expect(day.getByRole('link', { name: 'On the plan table' })).toHaveAttribute(
			'href',
			new RegExp(`/table/1\\?date=${year}-03-02$`)
		);
		await sheet.press('End');
		await expect(page.getByRole('heading', { name: 'Friday 31 December' })).toBeVisible();
		// The first of July is row 181 of 365.
		const { height } = (await sheet.boundingBox())!;
		await sheet.click({ position: { x: 40, y: (height * 181.5) / 365 } });
		await expect(page.getByRole('heading', { name: 'Thursday 1 July' })).toBeVisible();
	});

	await test.step('files hold what was found', async () => {
		const csv = await saved(page, 'CSV');
		expect(csv.file).toBe('quarry-terrace_terrace_2027_version-1.csv');
		expect(csv.text).toBe(windowsCsv(expected.windows, localClock(plan.timeZone)));
		const ics = await saved(page, 'iCalendar');
		expect(ics.text.match(/^BEGIN:VEVENT/gm)).toHaveLength(expected.windows.length);
		const svg = await saved(page, 'SVG');
		expect(svg.text).toContain('Quarry terrace, Terrace: bow in 2027');
		const png = await saved(page, 'PNG');
		expect(png.file).toMatch(/\.png$/);
		expect(png.text.slice(1, 4)).toBe('PNG');
	});

	await test.step('a what-if stands beside it with the difference', async () => {
		await page.getByLabel('With', { exact: true }).selectOption('what-if');
		await page.getByLabel('West curtain: Drops, µm').fill('fine');
		await expect(page.getByText('Give a number.')).toBeVisible();
		await page.getByLabel('West curtain: Drops, µm').fill('80');
		await page.getByLabel('North curtain is on').uncheck();
		const [west, north] = plan.curtains;
		const other = engine({
			...plan,
			curtains: [
				{ ...west!, dropDiameter: 80 },
				{ ...north!, enabled: false }
			]
		}).totals.year;
		const all = expected.totals.year;
		await expect(rowOf(page, 'Year').getByRole('cell')).toHaveText(
			(['bowMinutes', 'openMinutes', 'slots'] as const).flatMap((key) => [
				number(all[key]),
				number(other[key]),
				signed(Math.round(other[key] - all[key]))
			])
		);
		await expect(page.getByText('All 365 days computed.')).toHaveCount(2);
		expect(asked).toEqual([]);
		await expectAccessible(page);
	});

	await test.step('the address keeps the day', async () => {
		await expect(page).toHaveURL(/day=2027-07-01/);
		await page.reload();
		await expect(page.getByRole('heading', { name: 'Thursday 1 July' })).toBeVisible();
	});
});

test('a year that is being computed can be stopped and begun again', async ({ page }) => {
	await openDesk(page, 'planner');
	await page.goto(`${page.url()}/sites/quarry-terrace/year`);
	await expect(page.getByText(/days computed\.$/)).toBeVisible();
	// A change starts it anew; the click comes before the year is done.
	await page.evaluate(() => {
		const year = document.querySelector<HTMLInputElement>('input[name=year]')!;
		year.value = '2031';
		year.dispatchEvent(new Event('input', { bubbles: true }));
		const stop = () => {
			const button = [...document.querySelectorAll('button')].find(
				({ textContent }) => textContent?.trim() === 'Stop'
			);
			if (button) button.click();
			else requestAnimationFrame(stop);
		};
		requestAnimationFrame(stop);
	});
	await expect(page.getByText(/^Stopped after \d+ of 365 days\.$/)).toBeVisible();
	await page.getByRole('button', { name: 'Compute again' }).click();
	await expect(page.getByText('All 365 days computed.')).toBeVisible();
	await expectAccessible(page);
});

test.describe('without script', () => {
	test.use({ javaScriptEnabled: false });
	test('the page says what it needs and leads to the stored windows', async ({ page }) => {
		await openDesk(page, 'planner');
		await page.goto(`${page.url()}/sites/quarry-terrace/year`);
		await expect(page.getByText('needs script')).toBeVisible();
		await page.getByRole('main').getByRole('link', { name: 'stored windows', exact: true }).click();
		await expect(page.getByRole('heading', { level: 1 })).toHaveText('Windows');
	});
});
