import { demoDesk, expect, expectAccessible, signIn, test } from './helpers.ts';

test('a skyline comes from a file, whatever the spreadsheet wrote, and what is none is told', async ({
	page
}) => {
	await signIn(page, 'planner');
	await page.goto(`${await demoDesk(page)}/sites/quarry-terrace/plan/1`);
	await page.getByRole('button', { name: 'Save as a new version' }).click();
	await page.waitForURL(/\/plan\/\d+\?saved$/);
	const file = page.getByLabel('From a CSV file');
	const typed = page.getByLabel('Azimuth and altitude');
	const give = (name: string, buffer: Buffer) =>
		file.setInputFiles({ name, mimeType: 'text/csv', buffer });
	const save = page.getByRole('button', { name: /^Save version/ });
	const before = await typed.inputValue();

	await give('hills.csv', Buffer.from('\x89PNG\r\n\x1a\n\0\0\0\rIHDR', 'latin1'));
	await expect(page.getByText('This file is no text.')).toBeVisible();
	await give('empty.csv', Buffer.from(' \n'));
	await expect(page.getByText('This file is empty.')).toBeVisible();
	await give('huge.csv', Buffer.alloc(2 * 1024 * 1024 + 1, '1'));
	await expect(page.getByText('This file has more than 2 MB')).toBeVisible();
	await expect(typed).toHaveValue(before);
	await expectAccessible(page);

	// A hundred thousand lines: one message at the field, and all of them are still there.
	const lines = Array.from({ length: 100_000 }, (_, i) => `${(i * 0.0036).toFixed(4)};3`).join(
		'\n'
	);
	await give('long.csv', Buffer.from(lines));
	await page.getByLabel('Curtain 1, Top').fill('7,5');
	await save.click();
	await expect(page.getByText('must have at most 3600')).toHaveCount(2);
	await expect(page.getByRole('link', { name: 'Skyline' })).toBeVisible();
	expect((await typed.inputValue()).split('\n')).toHaveLength(100_000);
	await expect(page.getByLabel('Curtain 1, Top')).toHaveValue('7,5');

	// UTF-16 with its mark, a heading, semicolons and decimal commas.
	const utf16 = Buffer.from('\uFEFFAzimut;Höhe\r\n0;6,5\r\n90;4\r\n', 'utf16le');
	await give('hills.csv', utf16);
	await expect(typed).toHaveValue(/0;6,5/);
	await save.click();
	await expect(page.getByText('Saved.')).toBeVisible();
	await expect(typed).toHaveValue('0; 6.5\n90; 4');
	await expect(page.getByLabel('Curtain 1, Top')).toHaveValue('7.5');
});
