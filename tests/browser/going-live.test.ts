import { readFileSync } from 'node:fs';
import { createSite, findWindows } from '../../src/lib/optics/index.ts';
import type { Plan } from '../../src/lib/schemas/plan.ts';
import { caughtFor } from '../support/letters.ts';
import {
	expect,
	expectAccessible,
	letterTo,
	linkIn,
	newAddress,
	signIn,
	test,
	type Page
} from './helpers.ts';

/** A plan changes under sold slots: the planner keeps one, moves one and calls one off. */

const home = '/desk/hollin-mist-gardens';
const shop = '/at/hollin-mist-gardens/sluice-yard';
const site = `${home}/sites/sluice-yard`;
const plan = JSON.parse(readFileSync('tests/fixtures/quarry-terrace.json', 'utf8')) as Plan;
const seasonDays = 8;

const isoDate = (daysAhead: number) =>
	new Date(Date.now() + daysAhead * 86_400_000).toISOString().slice(0, 10);

interface Slot {
	id: string;
	startsAt: string;
	endsAt: string;
	date: string;
}

/** A top of the second curtain under which at least three of the slots lose their bow and three keep it. */
function lowerCurtain(slots: Slot[]): { top: number; outside: Slot[]; inside: Slot[] } {
	for (let top = 5; top > 0.5; top -= 0.25) {
		const curtains = [plan.curtains[0]!, { ...plan.curtains[1]!, top }];
		const [{ windows } = { windows: [] }] = findWindows({
			site: createSite({ ...plan, curtains }),
			from: isoDate(-1),
			to: isoDate(seasonDays + 1)
		});
		const lies = (slot: Slot) =>
			windows.some(
				({ startMs, endMs }) =>
					startMs <= Date.parse(slot.startsAt) && Date.parse(slot.endsAt) <= endMs
			);
		const outside = slots.filter((slot) => !lies(slot));
		const inside = slots.filter(lies);
		if (outside.length >= 3 && inside.length >= 3) return { top, outside, inside };
	}
	throw new Error('no curtain parts the slots of this season');
}

const timeOf = (instant: string) =>
	new Intl.DateTimeFormat('en-GB', {
		hour: '2-digit',
		minute: '2-digit',
		timeZone: plan.timeZone
	}).format(new Date(instant));

/** Sets the site up by the screens, with a published programme. */
async function setUp(planner: Page): Promise<void> {
	await planner.goto(`${home}/sites/new`);
	await planner.getByLabel('Name').fill('Sluice yard');
	await planner.getByLabel('Latitude').fill(String(plan.latitude));
	await planner.getByLabel('Longitude').fill(String(plan.longitude));
	await planner.getByLabel('Elevation').fill(String(plan.elevation));
	await planner.getByRole('button', { name: 'Set up the site' }).click();
	await planner.getByLabel('Plan file').setInputFiles('tests/fixtures/quarry-terrace.json');
	await planner.getByRole('button', { name: 'Upload', exact: true }).click();
	await planner.getByRole('link', { name: 'Make version 1 live' }).click();
	await planner.getByRole('button', { name: 'Make version 1 live' }).click();
	await planner.getByLabel('From').fill(isoDate(0));
	await planner.getByLabel('To', { exact: true }).fill(isoDate(seasonDays));
	await planner.getByRole('button', { name: 'Compute' }).click();
	await expect(planner.getByRole('link', { name: /to .* \d{4}$/ })).toBeVisible({
		timeout: 30_000
	});
	await planner.getByRole('link', { name: 'Make a programme' }).click();
	await planner.getByLabel('Name').fill('Mornings');
	await planner.getByLabel('Season from').fill(isoDate(0));
	await planner.getByLabel('Season to').fill(isoDate(seasonDays));
	const week = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'];
	for (const day of week) await planner.getByLabel(day).fill('05:00-22:00');
	await planner.getByLabel('Price 1').fill('14,50');
	await planner.getByRole('button', { name: 'Save and see the slots' }).click();
	await planner.getByRole('button', { name: /Publish \d+ slots/ }).click();
	await expect(planner.getByText(/^Published: \d+ slots added/)).toBeVisible();
	await planner.goto(site);
	await planner.getByLabel('Open to visitors').check();
	await planner.getByRole('button', { name: 'Save the site' }).click();
	await expect(planner.getByText('The site is saved.')).toBeVisible();
}

/** Buys two places of a slot. @returns the visitor's address */
async function buy(page: Page, slot: Slot, name: string): Promise<string> {
	const email = newAddress();
	await page.goto(`${shop}/${slot.id}`);
	await page.getByLabel('Adult').fill('2');
	await page.getByLabel('Your name').fill(name);
	await page.getByLabel('E-mail address').fill(email);
	await page.getByRole('button', { name: 'Hold these places' }).click();
	await page.getByRole('link', { name: 'Pay 29.00 EUR' }).click();
	await page.getByLabel(/card number/i).fill('4242424242424242');
	await page.getByRole('button', { name: /^Pay / }).click();
	await expect(page.getByRole('heading', { level: 1 })).toHaveText('You are expected');
	return email;
}

test('a lower curtain takes the bow from sold slots, and a person decides about each', async ({
	browser
}) => {
	test.setTimeout(180_000);
	const planner = await (await browser.newContext()).newPage();
	await signIn(planner, 'planner');
	await setUp(planner);

	const visitor = await (await browser.newContext()).newPage();
	const answer = await visitor.request.get(
		`/api/v1/operators/hollin-mist-gardens/sites/sluice-yard/slots?from=${isoDate(0)}&to=${isoDate(seasonDays)}`
	);
	const { slots } = (await answer.json()) as { slots: Slot[] };
	const { top, outside, inside } = lowerCurtain(
		slots.filter(({ startsAt }) => Date.parse(startsAt) > Date.now() + 600_000)
	);
	const [kept, moved, off] = outside as [Slot, Slot, Slot];
	const target = inside.find(({ startsAt }) => startsAt > moved.startsAt)!;
	await buy(visitor, kept, 'Kay Holm');
	const movedTo = await buy(visitor, moved, 'Mo Verge');
	const paidBack = await buy(visitor, off, 'Olive Fenn');
	const choiceFor = (slot: Slot) =>
		planner
			.getByRole('listitem')
			.filter({ hasText: `${timeOf(slot.startsAt)}–${timeOf(slot.endsAt)}` })
			.filter({ has: planner.locator(`input[value="${slot.id}"]`) })
			.getByRole('combobox');

	await test.step('the planner lowers the curtain and sees what going live does', async () => {
		await planner.goto(`${site}/plan/1`);
		await planner.getByLabel('Curtain 2, Top').fill(String(top));
		await planner.getByRole('button', { name: /as a new version|as version/i }).click();
		await expect(planner.getByRole('heading', { level: 1 })).toHaveText('Plan, version 2');
		await planner.getByRole('link', { name: 'Make version 2 live' }).click();
		await expect(planner.getByText('3 slots with 6 places sold', { exact: false })).toBeVisible();
		// Nothing is decided by not looking.
		await expect(planner.getByText('Leave 3 slots to be decided')).toBeVisible();
		for (const slot of [kept, moved, off]) await expect(choiceFor(slot)).toHaveValue('later');
		await expectAccessible(planner);
	});

	await test.step('chooses for each, is told in numbers, and is asked for the reason', async () => {
		await choiceFor(kept).selectOption({ value: 'keep' });
		await choiceFor(moved).selectOption({ value: `move:${target.id}` });
		await choiceFor(off).selectOption({ value: 'call_off' });
		await expect(planner.getByText('Keep 1 slot as it is.')).toBeVisible();
		await expect(
			planner.getByText('Move 1 slot: 1 order, 2 places, write to 1 visitor. No money moves.')
		).toBeVisible();
		await expect(
			planner.getByText('Call off 1 slot: refund 1 order, 29.00 EUR, write to 1 visitor.')
		).toBeVisible();
		await planner.getByRole('button', { name: 'Make version 2 live' }).click();
		await expect(
			planner.getByText('Say why, in a sentence that visitors will read.')
		).toBeVisible();
		await expect(choiceFor(off)).toHaveValue('call_off');
	});

	await test.step('somebody buys meanwhile: it is told, and the choices are still there', async () => {
		await buy(visitor, kept, 'Late Comer');
		await planner.getByLabel('Reason').fill('The north curtain hangs lower now.');
		await planner.getByRole('button', { name: 'Make version 2 live' }).click();
		await expect(planner.getByText('Something has changed since you looked.')).toBeVisible();
		await expect(planner.getByText('4 places sold in 2 orders.')).toBeVisible();
		await expect(choiceFor(moved)).toHaveValue(`move:${target.id}`);
		await expect(choiceFor(off)).toHaveValue('call_off');
		await expect(planner.getByLabel('Reason')).toHaveValue('The north curtain hangs lower now.');
		await planner.getByRole('button', { name: 'Make version 2 live' }).click();
		await expect(planner.getByRole('heading', { level: 1 })).toHaveText(
			'Sold slots outside the windows'
		);
		await expect(planner.getByText('or it is decided what becomes of it')).toBeVisible();
		await expect(planner.getByText(/^Kept by /)).toBeVisible();
		await expectAccessible(planner);
	});

	await test.step('the move is seen through, and its visitor has a letter with the new time', async () => {
		await planner.getByRole('region', { name: 'Moves' }).getByRole('link').first().click();
		await expect(planner.getByText('1 of 1 order moved')).toBeVisible({ timeout: 20_000 });
		await expectAccessible(planner);
		const letter = await letterTo(movedTo, /^Moved: Sluice yard/);
		expect(letter.text).toContain(timeOf(target.startsAt));
		expect(letter.text).toContain('The north curtain hangs lower now.');
		await visitor.goto(linkIn(letter));
		await expect(visitor.getByText(timeOf(target.startsAt), { exact: true })).toBeVisible();
		await expect(visitor.getByText(/^Moved from /)).toBeVisible();
		await expect(visitor.getByText('all of the 29.00 EUR goes back')).toBeVisible();
		await expect(visitor.getByRole('img', { name: /QR code/ })).toHaveCount(2);
		await expectAccessible(visitor);
	});

	await test.step('publishing anew keeps to the decisions', async () => {
		await planner.goto(site);
		await planner.getByRole('link', { name: 'Mornings' }).click();
		// The windows of the season are computed by going live itself.
		await expect(planner.getByText(/^Kept by|Kept by .*, \d+ \w+ \d{4}/)).toBeVisible({
			timeout: 30_000
		});
		await planner.getByRole('button', { name: /^Publish/ }).click();
		await expect(planner.getByText(/^Published: /)).toBeVisible();
	});

	await test.step('the called-off visitor is told, the kept ones hear nothing', async () => {
		await letterTo(paidBack, /^Called off: Sluice yard/);
		await planner.goto(home);
		await expect(planner.getByText('Sold outside the windows')).toHaveCount(0);
	});

	await test.step('the box office moves an order back to another time at the visitor’s wish', async () => {
		const office = await (await browser.newContext()).newPage();
		await signIn(office, 'box office');
		await office.goto(`${home}/orders?search=Kay+Holm`);
		await office.getByRole('row').getByRole('link').first().click();
		await office.getByText('Move to another slot').click();
		await office.getByLabel('To', { exact: true }).selectOption({ value: inside[1]!.id });
		await expect(office.getByText('2 places go there, 2 tickets are replaced')).toBeVisible();
		await office.getByRole('button', { name: 'Move the order' }).click();
		await expect(office.getByText(/^Moved to .*A letter with the new tickets/)).toBeVisible();
		await expectAccessible(office);
		await office.context().close();
	});

	await test.step('the visitor who was moved cancels, and all of it goes back', async () => {
		await visitor.getByText('Cancel the order').click();
		await expect(visitor.getByText(/29\.00 EUR to the card that paid/)).toBeVisible();
		await visitor.getByRole('button', { name: 'Cancel 2 places' }).click();
		await expect(visitor.getByRole('heading', { level: 1 })).toHaveText('This order is cancelled');
		expect(await caughtFor(movedTo, process.env.TEST_MAIL_API!)).not.toHaveLength(0);
		await letterTo(movedTo, /^Cancelled/);
	});

	await test.step('and again without script: the numbers are told before anything is done', async () => {
		const context = await browser.newContext({ javaScriptEnabled: false });
		const plain = await context.newPage();
		await signIn(plain, 'planner');
		await plain.goto(`${site}/plan/1/live`);
		await plain.getByRole('button', { name: 'Make version 1 live' }).click();
		await expect(plain.getByRole('heading', { level: 1 })).toHaveText('Windows');
		await plain.goto(`${site}/plan/2/live`);
		const choice = plain.getByRole('combobox').first();
		await choice.selectOption('call_off');
		await plain.getByLabel('Reason').fill('The north curtain hangs lower now.');
		const button = plain.getByRole('button', { name: 'Make version 2 live' });
		await button.click();
		await expect(plain.getByText('Nothing is done yet.', { exact: false })).toBeVisible();
		await expect(plain.getByText(/^Call off 1 slot: refund 1 order, 29\.00 EUR/)).toBeVisible();
		await expect(choice).toHaveValue('call_off');
		await expect(plain.getByLabel('Reason')).toHaveValue('The north curtain hangs lower now.');
		await button.click();
		await expect(plain.getByRole('heading', { level: 1 })).toHaveText(
			'Sold slots outside the windows'
		);
		await context.close();
	});
});
