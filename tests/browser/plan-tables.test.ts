import { demoDesk, expect, signIn, test, type Page } from './helpers.ts';

// The tables are the way for who has no script, and have to hold all that the table with script holds.
test.use({ javaScriptEnabled: false });

const cell = (page: Page, label: string) => page.getByLabel(label, { exact: true });
const save = (page: Page) => page.getByRole('button', { name: /^Save version \d+$/ }).click();

/** A new version of the demo's terrace, open in its tables; answers its path. */
async function newVersion(page: Page): Promise<string> {
	await page.goto(`${await demoDesk(page)}/sites/quarry-terrace/plan/1`);
	await page.getByRole('button', { name: 'Save as a new version' }).click();
	await page.waitForURL(/\/plan\/\d+\?saved$/);
	return new URL(page.url()).pathname;
}

test('of two who save one version the second is told however often, and brings both together', async ({
	page,
	browser
}) => {
	await signIn(page, 'planner');
	const path = await newVersion(page);
	const context = await browser.newContext({ javaScriptEnabled: false });
	const other = await context.newPage();
	await signIn(other, 'owner');
	await other.goto(path);
	await page.goto(path);

	await cell(page, 'Curtain 1, Drops, µm').fill('400');
	await cell(page, 'Curtain 1, Top').fill('7');
	await cell(page, 'Curtain 2, Flow, l/min').fill('12,5');
	await save(page);
	await expect(page.getByText('Saved.')).toBeVisible();

	await cell(other, 'Curtain 1, Drops, µm').fill('500');
	await cell(other, 'Wall 1, Top').fill('9.5');
	await cell(other, 'Curtain 2, Bottom').fill('tall');
	await save(other);
	await expect(other.getByText('Not saved. What you typed is all here.')).toBeVisible();
	await cell(other, 'Curtain 2, Bottom').fill('0.4');
	await save(other);
	await expect(other.getByText(/has saved this version since you opened it/)).toBeVisible();
	await expect(cell(other, 'Curtain 1, Drops, µm')).toHaveValue('500');
	// What was sent once and refused does not pass for new.
	await expect(other.getByRole('button', { name: /^Save version/ })).toHaveCount(0);
	await expect(other.locator('input[name=revision]')).toHaveValue('1');

	await other.getByRole('button', { name: 'Bring the two together' }).click();
	await expect(other.getByText('2 changes of theirs came in')).toBeVisible();
	await expect(
		other.getByText('West curtain, drops: both changed it. Yours stays. Theirs: 400.')
	).toBeVisible();
	for (const [label, value] of [
		['Curtain 1, Drops, µm', '500'],
		['Curtain 1, Top', '7'],
		['Curtain 2, Flow, l/min', '12.5'],
		['Curtain 2, Bottom', '0.4'],
		['Wall 1, Top', '9.5']
	]) {
		await expect(cell(other, label!)).toHaveValue(value!);
	}
	await save(other);
	await expect(other.getByText('Saved.')).toBeVisible();
	await expect(cell(other, 'Curtain 1, Top')).toHaveValue('7');
	await context.close();
});
