import {
	appCode,
	demoSignIn,
	expect,
	letterTo,
	linkIn,
	newAddress,
	PASSWORD,
	signIn,
	signOut,
	signUp,
	test
} from './helpers.ts';

test.use({ javaScriptEnabled: false });

test('signing in and out works, and a refusal keeps what was typed', async ({ page }) => {
	const { email } = demoSignIn('steward');
	await page.goto('/sign-in');
	await page.getByLabel('E-mail address').fill(email);
	await page.getByLabel('Password').fill('not the password');
	await page.getByRole('button', { name: 'Sign in' }).click();
	await expect(page.getByText('do not fit together')).toBeVisible();
	await expect(page.getByLabel('E-mail address')).toHaveValue(email);
	await signIn(page, 'steward');
	await expect(page.getByRole('heading', { name: 'Your operators' })).toBeVisible();
	await signOut(page);
	await expect(page.getByText('You are signed out.')).toBeVisible();
});

test('members are invited, join, change role and go', async ({ page, browser }) => {
	await signUp(page);
	await page.getByRole('link', { name: 'Members' }).click();
	const email = newAddress();
	const form = page.getByRole('region', { name: 'Invite somebody' });
	await form.getByLabel('E-mail address').fill(email);
	await form.getByLabel('Role').selectOption('steward');
	await form.getByRole('button', { name: 'Send the invitation' }).click();
	await expect(page.getByText(`A letter is on its way to ${email}`)).toBeVisible();

	const context = await browser.newContext({ javaScriptEnabled: false });
	const there = await context.newPage();
	await there.goto(linkIn(await letterTo(email, /^Join/)));
	await there.getByLabel('Your name').fill('Sten Steward');
	await there.getByLabel('Password').fill(PASSWORD);
	await there.getByRole('button', { name: 'Join' }).click();
	await expect(there).toHaveURL(/\/desk\//);
	await context.close();

	await page.getByRole('link', { name: 'Members' }).click();
	await page.getByRole('combobox', { name: 'Role of Sten Steward' }).selectOption('planner');
	await page.getByRole('button', { name: 'Save role of Sten Steward' }).click();
	await expect(page.getByText('The role is changed.')).toBeVisible();
	await expect(page.getByRole('combobox', { name: 'Role of Sten Steward' })).toHaveValue('planner');
	await page.locator('summary', { hasText: /Remove\s*Sten Steward/ }).click();
	await page.getByRole('button', { name: 'Remove Sten Steward' }).click();
	await expect(page.getByText('The member is removed.')).toBeVisible();
	await expect(page.getByRole('combobox', { name: 'Role of Sten Steward' })).toHaveCount(0);
});

test('a second step is turned on and passed', async ({ page }) => {
	const owner = await signUp(page);
	await page.goto('/me/second-step');
	const key = (await page.locator('code').first().textContent()) ?? '';
	await page.getByLabel('Code that the app shows').fill(appCode(key));
	await page.getByRole('button', { name: 'Turn the second step on' }).click();
	await expect(page.getByRole('region', { name: 'Recovery codes' })).toBeVisible();
	await signOut(page);
	await signIn(page, owner);
	await page.getByLabel('Code', { exact: true }).fill(appCode(key, 1));
	await page.getByRole('button', { name: 'Go on' }).click();
	await expect(page).toHaveURL('/operators');
});
