import { countPlan } from '../../src/lib/place-search/count.ts';
import type { PlaceQuestion } from '../../src/lib/place-search/question.ts';
import type { Plan } from '../../src/lib/schemas/plan.ts';
import { expect, expectAccessible, openDesk, test, type Page } from './helpers.ts';

// The whole drawing is in sight, so that nothing scrolls under a drag.
test.use({ viewport: { width: 1280, height: 1100 } });

const field = (page: Page, label: string) => page.getByLabel(label, { exact: true });
const card = (page: Page, number: number) => page.getByRole('article', { name: `Place ${number}` });
const found = (page: Page) => page.locator('[data-suggestion]');
const asked = (page: Page) => page.getByRole('region', { name: 'What is sought' });

/** A search that takes seconds: three weeks of spring, with hours of its own. */
async function shortSeason(page: Page): Promise<void> {
	await page.getByLabel('Opening hours of').selectOption('typed');
	await field(page, 'Monday to Friday').fill('08:00-18:00');
	await field(page, 'Saturday and Sunday').fill('10:00-16:00');
	await field(page, 'From').fill('2027-04-05');
	await field(page, 'To').fill('2027-04-25');
}

const workday = [{ fromMinute: 480, toMinute: 1080 }];
const weekend = [{ fromMinute: 600, toMinute: 960 }];
const selling: Pick<PlaceQuestion, 'season' | 'pattern' | 'capacity'> = {
	season: { from: '2027-04-05', to: '2027-04-25' },
	pattern: {
		lengthMinutes: 20,
		gapMinutes: 10,
		gridMinutes: 10,
		hours: {
			weekdays: [workday, workday, workday, workday, workday, weekend, weekend],
			daysOff: []
		}
	},
	capacity: 8
};

/** What the engine counts for a saved plan, with the hours and slots of the short season. */
async function counted(page: Page, table: string): Promise<{ plan: Plan; openMinutes: number }> {
	const answer = await page.request.get(`${table.replace('/table/', '/plan/')}/plan.json`);
	const plan = (await answer.json()) as Plan;
	const question = { ...selling, plan, zoneIndex: 0 } as PlaceQuestion;
	return { plan, openMinutes: countPlan(question, plan).openMinutes };
}

const minutesOf = async (page: Page, number: number) =>
	Number(await card(page, number).locator('[data-minutes]').getAttribute('data-minutes'));

test('a planner has a place suggested and takes it into the plan', async ({ page }) => {
	test.slow();
	await openDesk(page, 'planner');
	await page.goto(`${page.url()}/sites/quarry-terrace/table/1`);
	await page.getByRole('button', { name: 'Save as a new version' }).click();
	await page.waitForURL(/\/table\/\d+\?saved$/);
	const table = new URL(page.url()).pathname;
	await page.getByRole('link', { name: 'Suggest a place' }).click();
	await expect(page.getByRole('heading', { level: 1 })).toHaveText('Suggest a place');

	await test.step('the programme and the curtain fill the fields in', async () => {
		await expect(field(page, 'Curtain')).toHaveValue('0');
		await expect(field(page, 'Length, m')).toHaveValue('16');
		await expect(field(page, 'Top, m')).toHaveValue('6.5');
		await expect(page.getByLabel('Opening hours of')).not.toHaveValue('typed');
		await field(page, 'Curtain').selectOption('North curtain');
		await expect(field(page, 'Length, m')).toHaveValue('20');
		await expect(field(page, 'Drops, µm')).toHaveValue('260');
		await field(page, 'Curtain').selectOption('West curtain');
	});
	await shortSeason(page);
	await field(page, 'Places in a slot').fill('8');

	await test.step('what is wrong is said at its field, and nothing typed is lost', async () => {
		const start = page.getByRole('button', { name: 'Search a place' });
		await field(page, 'Top, m').fill('0.2');
		await field(page, 'Drops, µm').fill('fine');
		await field(page, 'Length, m').fill('90');
		await field(page, 'To').fill('2027-04-01');
		await field(page, 'Monday to Friday').fill('18:00-08:00');
		await start.click();
		await expect(page.getByText('Not started. 5 fields to mend first.')).toBeVisible();
		await expect(field(page, 'Top, m')).toHaveAccessibleDescription(
			'The top must be above the bottom.'
		);
		await expect(field(page, 'Drops, µm')).toHaveAccessibleDescription('Give a number.');
		await expect(field(page, 'Length, m')).toHaveAccessibleDescription(/too long for it/);
		await expect(field(page, 'To')).toHaveAccessibleDescription('The end is before the start.');
		await expect(field(page, 'Monday to Friday')).toHaveAccessibleDescription(/Give hours/);
		await expect(field(page, 'Drops, µm')).toHaveValue('fine');
		await expectAccessible(page);
		await field(page, 'Top, m').fill('6,5');
		await field(page, 'Drops, µm').fill('420');
		await field(page, 'Length, m').fill('0');
		await expect(field(page, 'Length, m')).toHaveAccessibleDescription(
			'The length must be above 0.'
		);
		await field(page, 'Length, m').fill('16');
		await field(page, 'To').fill('2027-04-25');
		await field(page, 'Monday to Friday').fill('08:00-18:00');
		await expect(page.getByText(/^Not started/)).toHaveCount(0);
	});

	await test.step('the area follows keys, mouse and numbers, and all of it is undone', async () => {
		const x = field(page, 'Corner 7 x, m');
		const y = field(page, 'Corner 7 y, m');
		await expect(x).toHaveValue('18');
		const corner = page.getByRole('button', { name: 'Corner 7 of Free area', exact: true });
		await corner.focus();
		await page.keyboard.press('ArrowRight');
		await page.keyboard.press('ArrowDown');
		await expect(x).toHaveValue('19');
		await expect(y).toHaveValue('16');
		const box = (await corner.boundingBox())!;
		const [px, py] = [box.x + box.width / 2, box.y + box.height / 2];
		await page.mouse.move(px, py);
		await page.mouse.down();
		await page.mouse.move(px + 60, py - 3, { steps: 5 });
		await page.mouse.up();
		await expect(x).not.toHaveValue('19');
		for (let act = 0; act < 3; act++) await page.getByRole('button', { name: 'Undo' }).click();
		await expect(x).toHaveValue('18');
		await expect(y).toHaveValue('17');
		await x.fill('-30');
		await expect(page.getByText(/^The free area crosses or touches itself/)).toBeVisible();
		await page.getByRole('button', { name: 'Search a place' }).click();
		await expect(page.getByText('Not started. 1 field to mend first.')).toBeVisible();
		await x.fill('18');
	});

	let best = 0;
	await test.step('the search shows how far it is and what it found', async () => {
		await page.getByRole('button', { name: 'Search a place' }).click();
		await expect(page.locator('[data-progress]')).toHaveText(/\d+ of [\d,]+ /);
		await expect(card(page, 1)).toContainText('about');
		await expect(page.getByRole('button', { name: 'Search again' })).toBeVisible({
			timeout: 120_000
		});
		const number = await found(page).count();
		expect(number).toBeGreaterThanOrEqual(2);
		expect(number).toBeLessThanOrEqual(5);
		await expect(page.locator('[data-place]')).toHaveCount(number);
		const present = Number(await page.locator('[data-present]').getAttribute('data-present'));
		expect(present).toBeCloseTo((await counted(page, table)).openMinutes, 6);
		best = await minutesOf(page, 1);
		expect(best).toBeGreaterThan(present);
		expect(best).toBeGreaterThanOrEqual(await minutesOf(page, 2));
		await expect(card(page, 1)).toContainText('more than now');
		await expect(card(page, 1)).toContainText(
			/Moved by a metre it keeps \d+ %.*turned by 5° \d+ %/
		);
		await card(page, 1).getByText('By month').click();
		await expect(card(page, 1).getByRole('row', { name: /^April/ })).toBeVisible();
		await page.locator('[data-place="2"]').focus();
		await page.keyboard.press('Enter');
		await expect(
			card(page, 2).getByRole('button', { name: 'Place 2', exact: true })
		).toHaveAttribute('aria-pressed', 'true');
		await expectAccessible(page);
		await field(page, 'Top, m').fill('7');
		await expect(page.getByText(/Search again to see what they do/)).toBeVisible();
	});

	await test.step('a place is taken, unsaved; saved, it gives what was said', async () => {
		await page.getByRole('button', { name: 'Take place 1 into the plan' }).click();
		await expect(page.getByText('The curtain stands at the suggested place.')).toBeVisible();
		expect(new URL(page.url()).pathname).toBe(table);
		await expect(page.locator('[data-dirty=true]')).toBeVisible();
		await expect(page.getByRole('heading', { name: 'West curtain' })).toBeVisible();
		await page.getByRole('button', { name: /^Save version/ }).click();
		await expect(page.getByText(/^Version \d+ is saved\.$/)).toBeVisible();
		const saved = await counted(page, table);
		expect(saved.openMinutes).toBeCloseTo(best, 6);
		expect(saved.plan.curtains).toHaveLength(2);
		expect(saved.plan.curtains[0]).toMatchObject({ name: 'West curtain', top: 6.5 });
	});
});

test('a search can be stopped, and a place taken into a new version of one that was live', async ({
	page
}) => {
	test.slow();
	await openDesk(page, 'planner');
	const site = `${page.url()}/sites/quarry-terrace`;
	await page.goto(site);
	await page.getByRole('link', { name: 'Suggest a place' }).click();
	await field(page, 'Curtain').selectOption('A new one');
	await expect(asked(page)).toBeVisible();
	await field(page, 'Length, m').fill('9');
	await shortSeason(page);
	// The click comes as soon as there is something to keep.
	await page.evaluate(() => {
		const named = (name: string) =>
			[...document.querySelectorAll('button')].find(
				({ textContent }) => textContent?.trim() === name
			);
		const stop = () => {
			if (document.querySelector('[data-suggestion]')) named('Stop')?.click();
			else requestAnimationFrame(stop);
		};
		named('Search a place')?.click();
		requestAnimationFrame(stop);
	});
	await expect(page.getByText(/^Stopped after \d+ places judged\./)).toBeVisible();
	await expect(card(page, 1)).toContainText('about');
	await expectAccessible(page);

	await page.getByRole('button', { name: 'Take place 1 into a new version' }).click();
	await page.waitForURL(/\/table\/\d+\?saved$/);
	await expect(page.getByText(/^Saved as version \d+\.$/)).toBeVisible();
	const { plan } = await counted(page, new URL(page.url()).pathname);
	expect(plan.curtains).toHaveLength(3);
	const { from, to } = plan.curtains[2]!;
	expect(Math.hypot(to[0] - from[0], to[1] - from[1])).toBeCloseTo(9, 2);
});

test('where nothing can be sold it says so and what to change', async ({ page }) => {
	await openDesk(page, 'planner');
	await page.goto(`${page.url()}/sites/quarry-terrace/place/1`);
	await shortSeason(page);
	await field(page, 'Monday to Friday').fill('00:00-03:00');
	await field(page, 'Saturday and Sunday').fill('');
	await page.getByRole('button', { name: 'Search a place' }).click();
	await expect(page.getByText(/gives a minute that could be sold/)).toBeVisible();
	await expect(page.getByText(/The sun is never high enough/)).toBeVisible();
	await expect(found(page)).toHaveCount(0);
});

test.describe('without script', () => {
	test.use({ javaScriptEnabled: false });
	test('the page says what it needs and leads to the tables', async ({ page }) => {
		await openDesk(page, 'planner');
		await page.goto(`${page.url()}/sites/quarry-terrace/place/1`);
		await expect(page.getByText('needs script')).toBeVisible();
		await page.getByRole('link', { name: 'in its tables' }).click();
		await expect(page.getByRole('heading', { level: 1 })).toHaveText('Plan, version 1');
	});
});
