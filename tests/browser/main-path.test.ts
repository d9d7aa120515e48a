import { readFileSync } from 'node:fs';
import type { Browser } from '@playwright/test';
import { caughtFor } from '../support/letters.ts';
import {
	expect,
	expectAccessible,
	linkIn,
	letterTo,
	signIn,
	test,
	type DemoRole,
	type Page
} from './helpers.ts';

/** The whole path, as its users walk it: planner, visitor, steward, planner again, bookkeeper. */

const operator = 'hollin-mist-gardens';

async function openPage(browser: Browser, role: DemoRole): Promise<Page> {
	const page = await (await browser.newContext()).newPage();
	await signIn(page, role);
	return page;
}

const isoDate = (daysAhead: number) =>
	new Date(Date.now() + daysAhead * 86_400_000).toISOString().slice(0, 10);

test('from a bare place to the money in the ledger', async ({ browser }) => {
	test.setTimeout(180_000);
	const planner = await openPage(browser, 'planner');
	const home = `/desk/${operator}`;

	await test.step('the planner sets up a site', async () => {
		await planner.goto(home);
		await planner
			.getByRole('navigation', { name: 'Main' })
			.getByRole('link', { name: 'Sites' })
			.click();
		await planner.getByRole('link', { name: 'Set up a site' }).click();
		await planner.getByLabel('Name').fill('Weir meadow');
		await planner.getByLabel('Latitude').fill('91');
		await planner.getByLabel('Longitude').fill('6,8745');
		await planner.getByLabel('Elevation').fill('512');
		await planner.getByRole('button', { name: 'Set up the site' }).click();
		await expect(planner.getByText(/Give the latitude from -90 to 90/)).toBeVisible();
		// Nothing that was typed is lost.
		await expect(planner.getByLabel('Name')).toHaveValue('Weir meadow');
		await planner.getByLabel('Latitude').fill('45° 55\' 52.32" N');
		await planner.getByRole('button', { name: 'Set up the site' }).click();
		await expect(planner.getByRole('heading', { level: 1 })).toHaveText('Weir meadow');
		// The zone is found from the coordinates.
		await expect(planner.getByLabel('Time zone')).toHaveValue('Europe/Paris');
	});

	await test.step('uploads a plan, is told what is wrong with one, and makes it live', async () => {
		const good = readFileSync('tests/fixtures/quarry-terrace.json', 'utf8');
		const plan = JSON.parse(good) as { curtains: { top: number }[] };
		plan.curtains[0]!.top = -1;
		const file = (text: string) => ({
			name: 'plan.json',
			mimeType: 'application/json',
			buffer: Buffer.from(text)
		});
		await planner.getByLabel('Plan file').setInputFiles(file(JSON.stringify(plan)));
		await planner.getByRole('button', { name: 'Upload', exact: true }).click();
		await expect(planner.getByRole('alert')).toContainText('curtains[0].top: must be above bottom');
		await planner.getByLabel('Plan file').setInputFiles(file(good));
		await planner.getByRole('button', { name: 'Upload', exact: true }).click();
		await expect(planner.getByRole('heading', { level: 1 })).toHaveText('Plan, version 1');
		// A draft is edited in plain tables.
		await planner.getByLabel('Curtain 1, Top').fill('0,1');
		await planner.getByRole('button', { name: 'Save version 1' }).click();
		await expect(planner.getByText('Not saved. What you typed is all here.')).toBeVisible();
		await expect(planner.getByLabel('Curtain 1, Top')).toHaveValue('0,1');
		await planner.getByLabel('Curtain 1, Top').fill('6,8');
		await planner.getByRole('button', { name: 'Save version 1' }).click();
		await expect(planner.getByText('Saved.', { exact: true })).toBeVisible();
		await expect(planner.getByLabel('Curtain 1, Top')).toHaveValue('6.8');
		await planner.getByRole('link', { name: 'Make version 1 live' }).click();
		await expect(planner.getByText('There is no coming slot yet.')).toBeVisible();
		await planner.getByRole('button', { name: 'Make version 1 live' }).click();
	});

	await test.step('has the windows of a season computed', async () => {
		await expect(planner.getByRole('heading', { level: 1 })).toHaveText('Windows');
		await planner.getByLabel('From').fill(isoDate(0));
		await planner.getByLabel('To', { exact: true }).fill(isoDate(12));
		await planner.getByRole('button', { name: 'Compute' }).click();
		await expect(planner.getByRole('link', { name: /to .* \d{4}$/ })).toBeVisible({
			timeout: 30_000
		});
	});

	await test.step('makes a programme, looks at every slot, publishes and opens the site', async () => {
		await planner.getByRole('link', { name: 'Make a programme' }).click();
		await planner.getByLabel('Name').fill('Mornings');
		await planner.getByLabel('Season from').fill(isoDate(0));
		await planner.getByLabel('Season to').fill(isoDate(12));
		await planner.getByLabel('Places in a slot').fill('5');
		for (const day of [
			'Monday',
			'Tuesday',
			'Wednesday',
			'Thursday',
			'Friday',
			'Saturday',
			'Sunday'
		]) {
			await planner.getByLabel(day).fill('05:00-22:00');
		}
		await planner.getByLabel('Price 1').fill('free');
		await planner.getByRole('button', { name: 'Save and see the slots' }).click();
		await expect(planner.getByText('Adult: give the price in EUR')).toBeVisible();
		await planner.getByLabel('Price 1').fill('14,50');
		await planner.getByLabel('Category 2').fill('Child');
		await planner.getByLabel('Price 2').fill('7');
		await planner.getByLabel('Tax 2, %').fill('10');
		await planner.getByRole('button', { name: 'Save and see the slots' }).click();
		await expect(planner.getByRole('heading', { level: 1 })).toHaveText('Mornings');
		await expect(planner.getByText('of coming bow in no slot')).toBeVisible();
		await planner.getByRole('button', { name: /Publish \d+ slots/ }).click();
		await expect(planner.getByText(/^Published: \d+ slots added/)).toBeVisible();
		await planner.getByRole('link', { name: 'Weir meadow' }).click();
		await planner.getByLabel('Open to visitors').check();
		await planner.getByRole('button', { name: 'Save the site' }).click();
		await expect(planner.getByText('The site is saved.')).toBeVisible();
	});

	const email = 'wanda@visitors.example.org';
	let orderAddress = '';

	await test.step('a visitor without script chooses, holds, is refused a card, and pays', async () => {
		const context = await browser.newContext({ javaScriptEnabled: false });
		const visitor = await context.newPage();
		await visitor.goto(`/at/${operator}/weir-meadow`);
		await visitor.getByRole('link', { name: 'Choose places' }).first().click();
		await visitor.getByRole('button', { name: 'Hold these places' }).click({ force: true });
		await visitor.getByLabel('Your name').fill('Wanda Reed');
		await visitor.getByLabel('E-mail address').fill(email);
		await visitor.getByRole('button', { name: 'Hold these places' }).click();
		await expect(visitor.getByText('Choose at least one place.')).toBeVisible();
		await expect(visitor.getByLabel('Your name')).toHaveValue('Wanda Reed');
		await visitor.getByLabel('Adult').fill('2');
		await visitor.getByLabel('Child').fill('1');
		await visitor.getByRole('button', { name: 'Hold these places' }).click();
		await expect(visitor.getByRole('heading', { level: 1 })).toHaveText('Your places are held');
		orderAddress = visitor.url();
		await visitor.getByRole('link', { name: 'Pay 36.00 EUR' }).click();
		await visitor.waitForURL(new RegExp(process.env.TEST_PAYMENT_DOUBLE!));
		await payWith(visitor, '4000000000000002');
		await expect(visitor.getByText(/declined/i).first()).toBeVisible();
		await payWith(visitor, '4242424242424242');
		await visitor.waitForURL(/\/at\//);
		// The page tells the truth at once, however late the webhook is.
		await expect(visitor.getByRole('heading', { level: 1 })).toHaveText('You are expected');
		await expect(visitor.getByRole('img', { name: /QR code/ })).toHaveCount(3);
		await context.close();
	});

	let codes: string[] = [];
	await test.step('and gets a letter with the tickets, the receipt and the calendar entry', async () => {
		const letter = await letterTo(email);
		expect(await caughtFor(email, process.env.TEST_MAIL_API!)).toHaveLength(1);
		codes = letter.text.match(/[2-9A-Z]{4}(-[2-9A-Z]{4}){3}/g) ?? [];
		expect(codes).toHaveLength(3);
		const { attachments } = letter as unknown as { attachments: { contentType: string }[] };
		const types = attachments.map(({ contentType }) => contentType.split(';')[0]);
		expect(types).toContain('application/pdf');
		expect(types).toContain('text/calendar');
		expect(linkIn(letter)).toBe(orderAddress);
	});

	await test.step('the steward lets two in, and is told of a third time', async () => {
		const steward = await openPage(browser, 'steward');
		await steward.goto(`${home}/gate`);
		const option = steward.getByLabel('Slot').locator('option', { hasText: 'Weir meadow' }).first();
		await steward.getByLabel('Slot').selectOption({ value: (await option.getAttribute('value'))! });
		await steward.getByRole('button', { name: 'Change' }).click();
		await expect(steward.getByText('0 of 3 places in')).toBeVisible();
		for (const code of codes.slice(0, 2)) {
			await steward.getByLabel('Ticket code').fill(code.toLowerCase());
			await steward.getByRole('button', { name: 'Check' }).click();
			await expect(steward.getByText('Let in · Adult')).toBeVisible();
			await expect(steward.getByLabel('Ticket code')).toHaveValue('');
		}
		await expect(steward.getByText('2 of 3 places in')).toBeVisible();
		await steward.getByLabel('Ticket code').fill(codes[0]!);
		await steward.getByRole('button', { name: 'Check' }).click();
		await expect(steward.getByText('Used already')).toBeVisible();
		await expect(steward.getByText(/let in \d+ \w+ \d{4}/)).toBeVisible();
		// The gate is no place for money or addresses.
		await steward.goto(`${home}/orders`);
		await expect(
			steward.getByText('Your role at this operator does not include this.')
		).toBeVisible();
	});

	const second = 'otto@visitors.example.org';
	await test.step('another visitor buys a later slot, with script', async () => {
		const visitor = await (await browser.newContext()).newPage();
		await visitor.goto(`/at/${operator}/weir-meadow`);
		await visitor.getByRole('link', { name: 'Choose places' }).nth(2).click();
		await visitor.getByLabel('Adult').fill('4');
		await expect(visitor.getByText('Together 58.00 EUR')).toBeVisible();
		await visitor.getByLabel('Your name').fill('Otto Fenwick');
		await visitor.getByLabel('E-mail address').fill(second);
		await visitor.getByRole('button', { name: 'Hold these places' }).click();
		await visitor.getByRole('link', { name: 'Pay 58.00 EUR' }).click();
		await payWith(visitor, '4242424242424242');
		await expect(visitor.getByRole('heading', { level: 1 })).toHaveText('You are expected');
		await expectAccessible(visitor);
	});

	await test.step('the weather turns: the planner calls the slot off and sees it through', async () => {
		await planner.goto(`${home}/weather`);
		const site = planner.getByRole('region', { name: 'Weir meadow' });
		await site
			.getByRole('listitem')
			.filter({ hasText: '4 places sold' })
			.getByRole('checkbox')
			.check();
		await site.getByRole('button', { name: 'See what calling off would do' }).click();
		await expect(
			planner.getByText('Refund 1 order, 58.00 EUR, and write to 1 visitor (4 places).')
		).toBeVisible();
		await expectAccessible(planner);
		await planner.getByLabel('Reason').fill('no');
		await planner.getByRole('button', { name: 'Call off 1 slot' }).click();
		await expect(
			planner.getByText('Say why, in a sentence that visitors will read.')
		).toBeVisible();
		await planner.getByLabel('Reason').fill('A front comes in sooner than forecast.');
		await planner.getByRole('button', { name: 'Call off 1 slot' }).click();
		await expect(planner.getByText('1 of 1 order done')).toBeVisible({ timeout: 20_000 });
		await letterTo(second, /^Called off: Weir meadow/);
	});

	await test.step('the bookkeeper finds the ledger equal to the service’s balance, to the cent', async () => {
		const bookkeeper = await openPage(browser, 'bookkeeper');
		await bookkeeper.goto(`${home}/money`);
		const credit = bookkeeper.getByRole('row', { name: /Credit note/ }).first();
		await expect(credit).toContainText('58.00');
		const account = await connectedAccount();
		await expect
			.poll(async () => {
				await bookkeeper.reload();
				const shown = await bookkeeper
					.getByRole('region', { name: 'Balance' })
					.getByText(/^[\d,.]+ EUR$/)
					.innerText();
				return shown.replace(/[, A-Z]/g, '') === (await balanceAtService(account, 'eur'));
			})
			.toBe(true);
	});
});

async function payWith(page: Page, card: string): Promise<void> {
	await page.getByLabel(/card number/i).fill(card);
	await page.getByRole('button', { name: /^Pay / }).click();
}

async function askService<T>(path: string, account?: string): Promise<T> {
	const answer = await fetch(`${process.env.PAYMENT_API_URL}${path}`, {
		headers: {
			authorization: `Bearer ${process.env.PAYMENT_SECRET_KEY}`,
			...(account ? { 'stripe-account': account } : {})
		}
	});
	return (await answer.json()) as T;
}

/** The demo operator's account. */
async function connectedAccount(): Promise<string> {
	const { data } = await askService<{ data: { id: string; email: string }[] }>(
		'/v1/accounts?limit=100'
	);
	return data.find(({ email }) => email === 'office@hollin.example.org')!.id;
}

/** What the service holds, as a decimal. */
async function balanceAtService(account: string, currency: string): Promise<string> {
	type Part = { amount: number; currency: string };
	const { available, pending } = await askService<{ available: Part[]; pending: Part[] }>(
		'/v1/balance',
		account
	);
	const sum = [...available, ...pending]
		.filter((part) => part.currency === currency)
		.reduce((total, part) => total + part.amount, 0);
	return (sum / 100).toFixed(2);
}
