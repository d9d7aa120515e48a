import AxeBuilder from '@axe-core/playwright';
import { expect, test as base, type Page } from '@playwright/test';
import { readFileSync } from 'node:fs';
import { Secret, TOTP } from 'otpauth';
import { caughtFor, type CaughtLetter } from '../support/letters.ts';
import { until } from '../support/until.ts';

export { expect };
export type { Page };

/** The roles of the demo's people. */
export type DemoRole = 'owner' | 'planner' | 'box office' | 'steward' | 'bookkeeper';

export const PASSWORD = 'mist over the quarry';

/** What a browser says of answers that are no fault of the page: refused forms, pages that are not there. */
const EXPECTED_IN_CONSOLE = /Failed to load resource: the server responded with a status of 4\d\d/;

/**
 * As Playwright's `test`, and every test fails as well when a page threw an error or the browser
 * refused something, such as a script that the content policy does not allow.
 */
export const test = base.extend<{ quiet: void }>({
	quiet: [
		async ({ context }, use) => {
			const faults: string[] = [];
			context.on('weberror', (fault) => faults.push(String(fault.error())));
			context.on('console', (message) => {
				if (message.type() === 'error' && !EXPECTED_IN_CONSOLE.test(message.text())) {
					faults.push(`${message.text()} (${message.location().url})`);
				}
			});
			await use();
			expect(faults).toEqual([]);
		},
		{ auto: true }
	]
});

/** Address and password of the demo's person in a role. */
export function demoSignIn(role: DemoRole): { email: string; password: string } {
	const file = readFileSync(process.env.DEMO_FILE ?? '', 'utf8');
	const all = JSON.parse(file) as { role: string; email: string; password: string }[];
	const found = all.find((one) => one.role === role);
	if (!found) throw new Error(`The demo has nobody in the role of ${role}.`);
	return found;
}

/** Signs in by the form, as the demo's person in a role or as somebody else; ends at their operators. */
export async function signIn(
	page: Page,
	who: DemoRole | { email: string; password: string }
): Promise<void> {
	const { email, password } = typeof who === 'string' ? demoSignIn(who) : who;
	await page.goto('/sign-in');
	await page.getByLabel('E-mail address').fill(email);
	await page.getByLabel('Password', { exact: true }).fill(password);
	await page.getByRole('button', { name: 'Sign in' }).click();
	await page.waitForURL((url) => !/^\/sign-in$/.test(url.pathname));
}

/** Signs in and goes to the desk of the demo's operator. */
export async function openDesk(page: Page, role: DemoRole): Promise<void> {
	await signIn(page, role);
	await page.goto(await demoDesk(page));
}

/** The address of the demo operator's desk, for somebody who is signed in. */
export async function demoDesk(page: Page): Promise<string> {
	await page.goto('/operators');
	const link = page.getByRole('link', { name: /^Hollin Mist Gardens/ });
	return (await link.getAttribute('href')) ?? '';
}

/** Opens the menu under the person's name, which leads to their account and operators. */
export async function openPersonMenu(page: Page): Promise<void> {
	const menu = page.getByRole('banner').locator('details');
	if ((await menu.getAttribute('open')) === null) await menu.locator('summary').click();
}

export async function signOut(page: Page): Promise<void> {
	await openPersonMenu(page);
	await page.getByRole('button', { name: 'Sign out', exact: true }).click();
	await page.waitForURL('**/sign-in?done=out');
}

/** An address that nobody else has. */
export function newAddress(): string {
	return `${crypto.randomUUID()}@example.org`;
}

/** Waits for the newest letter to an address in the mail catcher; with `subject`, for one that fits. */
export function letterTo(address: string, subject = /./): Promise<CaughtLetter> {
	return until(`a letter to ${address}`, async () => {
		const letters = await caughtFor(address, process.env.TEST_MAIL_API ?? '');
		return letters.filter((letter) => subject.test(letter.subject)).at(-1);
	});
}

/** The one link of a letter that leads back to us. */
export function linkIn(letter: CaughtLetter): string {
	const found = letter.text.split(/\s/).find((word) => word.startsWith(process.env.ORIGIN ?? ''));
	if (!found) throw new Error(`The letter "${letter.subject}" has no link of ours.`);
	return found;
}

export interface NewOwner {
	email: string;
	password: string;
	operatorName: string;
}

/** Opens a new operator by the sign-up form and its letter; ends on its desk, signed in. */
export async function signUp(page: Page, operatorName?: string): Promise<NewOwner> {
	const owner = {
		email: newAddress(),
		password: PASSWORD,
		operatorName: operatorName ?? `Terrace ${crypto.randomUUID().slice(0, 8)}`
	};
	await page.goto('/sign-up');
	await page.getByLabel('Name of your organisation').fill(owner.operatorName);
	await page.getByLabel('Your name').fill('Juno Fell');
	await page.getByLabel('E-mail address').fill(owner.email);
	await page.getByLabel('Password').fill(owner.password);
	await page.getByRole('button', { name: 'Send the confirming letter' }).click();
	await expect(page.getByText(`A letter is on its way to ${owner.email}`)).toBeVisible();
	await page.goto(linkIn(await letterTo(owner.email, /^Confirm/)));
	await page.getByRole('button', { name: 'Confirm and go on' }).click();
	await page.waitForURL('**/desk/**');
	return owner;
}

/** The digits that an authenticator app shows for a key, now or some steps of 30 seconds ahead. */
export function appCode(key: string, stepsAhead = 0): string {
	const secret = Secret.fromBase32(key.replaceAll(/\s/g, ''));
	return new TOTP({ secret }).generate({ timestamp: Date.now() + stepsAhead * 30_000 });
}

/** Each width and each scheme once: colours do not hang on the width, nor the layout on the scheme. */
const LOOKS = [
	{ width: 1280, colorScheme: 'light' },
	{ width: 360, colorScheme: 'dark' }
] as const;

/**
 * Looks at the page that is open, light at 1280 pixels and dark at 360: axe finds nothing (WCAG 2.2 A and
 * AA and its best practices) and nothing sticks out to the side.
 */
export async function expectAccessible(page: Page): Promise<void> {
	const before = page.viewportSize();
	for (const { width, colorScheme } of LOOKS) {
		await page.setViewportSize({ width, height: 800 });
		await page.emulateMedia({ colorScheme, reducedMotion: 'reduce' });
		const look = `${new URL(page.url()).pathname} at ${width} px, ${colorScheme}`;
		const { violations } = await new AxeBuilder({ page })
			// Our pages have no frames; without them it need not open a second page each time.
			.setLegacyMode(true)
			.options({ resultTypes: ['violations'] })
			.analyze();
		const found = violations.map(
			({ id, nodes }) => `${id}: ${nodes.map((node) => node.target.join(' ')).join(' | ')}`
		);
		expect.soft(found, look).toEqual([]);
		const sticksOut = await page.evaluate(whatSticksOut);
		expect.soft(sticksOut, `${look}: sticks out to the side`).toEqual([]);
	}
	if (before) await page.setViewportSize(before);
	await page.emulateMedia({ colorScheme: null, reducedMotion: null });
}

/** In the browser: what makes the page wider than its window, the innermost first. */
function whatSticksOut(): string[] {
	const { scrollWidth, clientWidth } = document.documentElement;
	if (scrollWidth <= clientWidth) return [];
	return [...document.querySelectorAll('body *')]
		.filter((element) => element.getBoundingClientRect().right > clientWidth + 0.5)
		.map(
			(element) =>
				`${element.tagName.toLowerCase()} ${element.className} ${element.textContent?.trim().slice(0, 40)}`
		)
		.reverse()
		.slice(0, 5);
}

/** Pages of one kind, such as those of two slots or two sites, look alike: one of each kind is enough. */
function kindOf(path: string): string {
	return path
		.replaceAll(/[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f-]{22}/g, '*')
		.replaceAll(/\/sites\/(?!new\b)[\w-]+/g, '/sites/*')
		.replaceAll(/\/[\w-]{20,}/g, '/*')
		.replaceAll(/\d+/g, '#');
}

/**
 * Follows the links from `start` to pages whose path begins with `within`, looks at one of each kind
 * with `expectAccessible`, and answers the paths that it saw.
 */
export async function walkAccessible(
	page: Page,
	start: string[],
	within: string
): Promise<string[]> {
	const waiting = [...start];
	const known = new Set<string>();
	const seen: string[] = [];
	for (let path = waiting.shift(); path !== undefined; path = waiting.shift()) {
		if (known.has(kindOf(path))) continue;
		known.add(kindOf(path));
		// Documents and calendars are saved, which ends the visit.
		const answer = await page.goto(path).catch(() => null);
		if (!answer?.headers()['content-type']?.startsWith('text/html')) continue;
		await expectAccessible(page);
		seen.push(new URL(page.url()).pathname);
		const hrefs = await page
			.locator('a[href]:not([download])')
			.evaluateAll((links) => links.map((link) => (link as HTMLAnchorElement).href));
		for (const href of hrefs) {
			const url = new URL(href);
			if (url.origin === process.env.ORIGIN && url.pathname.startsWith(within)) {
				waiting.push(url.pathname);
			}
		}
	}
	return seen;
}
