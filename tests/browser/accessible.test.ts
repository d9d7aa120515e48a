import { demoDesk, expect, expectAccessible, signIn, test, walkAccessible } from './helpers.ts';

test('the pages of anybody', async ({ page }) => {
	test.slow();
	const paths = [
		...['/', '/sign-in', '/sign-up', '/forgotten'],
		...['/forgotten/lapsed', '/sign-up/confirm/lapsed', '/invitation/lapsed', '/address/lapsed'],
		'/nothing-here'
	];
	for (const path of paths) {
		await page.goto(path);
		await expectAccessible(page);
	}
});

test('forms that were refused', async ({ page }) => {
	await page.goto('/sign-in');
	await page.getByLabel('E-mail address').fill('nobody@example.org');
	await page.getByLabel('Password').fill('wrong');
	await page.getByRole('button', { name: 'Sign in' }).click();
	await expect(page.getByText('do not fit together')).toBeVisible();
	await expectAccessible(page);
});

test('the pages of a visitor', async ({ page }) => {
	test.slow();
	const slug = await demoSlug(page);
	const seen = await walkAccessible(page, [`/at/${slug}`], '/at/');
	expect(seen.length).toBeGreaterThan(2);
});

test('the gate of a steward and the money of a bookkeeper', async ({ page }) => {
	test.slow();
	for (const role of ['steward', 'bookkeeper'] as const) {
		await signIn(page, role);
		const desk = await demoDesk(page);
		for (const path of [desk, `${desk}/${role === 'steward' ? 'gate' : 'money'}`]) {
			await page.goto(path);
			await expectAccessible(page);
		}
		await page.context().clearCookies();
	}
});

test('the pages of an account', async ({ page }) => {
	test.slow();
	await signIn(page, 'owner');
	await page.goto('/operators');
	await expectAccessible(page);
	const seen = await walkAccessible(page, ['/me'], '/me');
	expect(seen).toEqual(['/me', '/me/second-step', '/me/sessions']);
});

test('the desk of an owner', async ({ page }) => {
	test.slow();
	await signIn(page, 'owner');
	const desk = await demoDesk(page);
	const seen = await walkAccessible(page, [desk], desk);
	expect(seen).toEqual(
		expect.arrayContaining(
			['', '/members', '/letters', '/trail', '/settings'].map((end) => desk + end)
		)
	);
});

test('the pages of the platform', async ({ page }) => {
	await signIn(page, 'owner');
	const seen = await walkAccessible(page, ['/platform'], '/platform');
	expect(seen).toEqual(['/platform', '/platform/queue', '/platform/health']);
});

async function demoSlug(page: Parameters<typeof demoDesk>[0]): Promise<string> {
	await signIn(page, 'owner');
	const slug = (await demoDesk(page)).split('/').at(-1) ?? '';
	await page.context().clearCookies();
	return slug;
}
