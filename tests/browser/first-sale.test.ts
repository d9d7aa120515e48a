import { expect, signUp, test } from './helpers.ts';

test('a new operator enters who sells, completes the account at the service, and is ready', async ({
	page
}) => {
	await signUp(page);
	const desk = new URL(page.url()).pathname;
	await page.goto(`${desk}/money`);
	await expect(page.getByText('Nothing can be sold yet')).toBeVisible();
	await page.getByRole('link', { name: 'Seller and account' }).click();
	await expect(page.getByRole('button', { name: 'Open an account' })).toBeDisabled();
	await page.getByLabel('Name').fill('Juno Fell Mists');
	await page.getByLabel('Street').fill('3 Weir Road');
	await page.getByLabel('Postcode').fill('4020');
	await page.getByLabel('Town').fill('Fellin');
	await page.getByLabel('Country').fill('Austria');
	await page.getByLabel('E-mail address').fill('office@example.org');
	await page.getByRole('button', { name: 'Save' }).click();
	// The field takes two letters, and says so whatever was pasted.
	await page.getByLabel('Country').fill('at');
	await page.getByRole('button', { name: 'Save' }).click();
	await expect(page.getByText('The seller is saved.')).toBeVisible();
	await page.getByRole('button', { name: 'Open an account' }).click();
	await expect(page.getByText('Complete it at the payment service.')).toBeVisible();
	await page.getByRole('link', { name: 'Complete it at the payment service' }).click();
	await page.getByRole('button', { name: 'Give everything and return' }).click();
	await expect(page.getByText('Complete: payments can be taken.')).toBeVisible();
	await page.goto(`${desk}/money`);
	await expect(page.getByText('Nothing can be sold yet')).toBeHidden();
});
