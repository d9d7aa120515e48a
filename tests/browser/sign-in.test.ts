import {
	appCode,
	demoDesk,
	demoSignIn,
	expect,
	letterTo,
	linkIn,
	signIn,
	signOut,
	signUp,
	test,
	type DemoRole
} from './helpers.ts';

const NEW_PASSWORD = 'a bow stands in the east';

test('the demo owner signs in and sees the operator’s home', async ({ page }) => {
	await signIn(page, 'owner');
	await page.getByRole('link', { name: /^Hollin Mist Gardens/ }).click();
	await expect(page.getByRole('heading', { level: 1 })).toBeVisible();
	await expect(page.getByRole('navigation', { name: 'Main' })).toBeVisible();
	await signOut(page);
	await page.goBack();
	await page.reload();
	await expect(page.getByRole('heading', { name: 'Sign in' })).toBeVisible();
});

test('what was typed stays when it is refused', async ({ page }) => {
	const { email } = demoSignIn('planner');
	await page.goto('/sign-in');
	await page.getByLabel('E-mail address').fill(email);
	await page.getByLabel('Password').fill('not the password');
	await page.getByRole('button', { name: 'Sign in' }).click();
	await expect(page.getByRole('status')).toContainText('do not fit together');
	await expect(page.getByLabel('E-mail address')).toHaveValue(email);
});

test('signing in leads on to the page that was asked for', async ({ page }) => {
	await page.goto('/me/sessions');
	await expect(page).toHaveURL('/sign-in?back=%2Fme%2Fsessions');
	const { email, password } = demoSignIn('planner');
	await page.getByLabel('E-mail address').fill(email);
	await page.getByLabel('Password').fill(password);
	await page.getByRole('button', { name: 'Sign in' }).click();
	await expect(page.getByRole('heading', { name: 'Sessions' })).toBeVisible();
	await expect(page.getByText('this one')).toHaveCount(1);
});

test('the menu of a desk holds what the role may use, and the pages behind the rest are closed', async ({
	page
}) => {
	const mayUse: Record<DemoRole, string[]> = {
		owner: ['Members', 'Letters', 'Trail', 'Settings'],
		planner: [],
		'box office': ['Letters'],
		steward: [],
		bookkeeper: ['Letters']
	};
	for (const [role, entries] of Object.entries(mayUse) as [DemoRole, string[]][]) {
		await page.context().clearCookies();
		await signIn(page, role);
		const desk = await demoDesk(page);
		for (const entry of mayUse.owner) {
			const answer = await page.goto(`${desk}/${entry.toLowerCase()}`);
			expect(answer?.status(), `${role} ${entry}`).toBe(entries.includes(entry) ? 200 : 403);
		}
		await page.goto(desk);
		const menu = page.getByRole('navigation', { name: 'Main' }).getByRole('link');
		for (const entry of mayUse.owner) {
			await expect(menu.getByText(entry, { exact: true })).toHaveCount(
				entries.includes(entry) ? 1 : 0
			);
		}
	}
});

test('an operator is opened by a letter, and opened again at another sign-in', async ({ page }) => {
	const owner = await signUp(page);
	await expect(page.getByRole('link', { name: owner.operatorName })).toBeVisible();
	await signOut(page);
	await signIn(page, owner);
	await expect(page.getByRole('link', { name: new RegExp(owner.operatorName) })).toBeVisible();
});

test('a forgotten password is replaced through a letter', async ({ page }) => {
	const owner = await signUp(page);
	await signOut(page);
	await page.getByRole('link', { name: 'Password forgotten' }).click();
	await page.getByLabel('E-mail address').fill(owner.email);
	await page.getByRole('button', { name: 'Send the link' }).click();
	await expect(page.getByRole('status')).toContainText('a letter with a link is on its way');
	const link = linkIn(await letterTo(owner.email, /^Set a new password/));
	await page.goto(link);
	await page.getByLabel('New password').fill('short');
	await page.getByRole('button', { name: 'Set the password' }).click();
	await expect(page.getByLabel('New password')).toBeFocused();
	await page.getByLabel('New password').fill(NEW_PASSWORD);
	await page.getByRole('button', { name: 'Set the password' }).click();
	await expect(page.getByRole('status')).toContainText('Your new password is set');
	await signIn(page, { ...owner, password: NEW_PASSWORD });
	await page.goto(link);
	await expect(page.getByRole('heading', { name: 'This link no longer works' })).toBeVisible();
});

test('a second step is turned on, asked for, passed by the app or by a recovery code', async ({
	page
}) => {
	const owner = await signUp(page);
	await page.goto('/me/second-step');
	const key = (await page.locator('code').first().textContent()) ?? '';
	await page.getByLabel('Code that the app shows').fill('000000');
	await page.getByRole('button', { name: 'Turn the second step on' }).click();
	await expect(page.getByText('do not belong to this key')).toBeVisible();
	// The key that was scanned stays the one on the page.
	await expect(page.locator('code').first()).toHaveText(key);
	await page.getByLabel('Code that the app shows').fill(appCode(key));
	await page.getByRole('button', { name: 'Turn the second step on' }).click();
	const codes = page.getByRole('region', { name: 'Recovery codes' }).getByRole('listitem');
	await expect(codes).toHaveCount(10);
	const [recovery = ''] = await codes.allTextContents();

	for (const code of [appCode(key, 1), recovery]) {
		await signOut(page);
		await signIn(page, owner);
		await expect(page.getByRole('heading', { name: 'Second step' })).toBeVisible();
		// Half signed in is not in.
		await page.goto('/operators');
		await expect(page).toHaveURL(/\/sign-in\/second-step/);
		await page.getByLabel('Code', { exact: true }).fill('123456');
		await page.getByRole('button', { name: 'Go on' }).click();
		await expect(page.getByText('This code is wrong or was used before.')).toBeVisible();
		await page.getByLabel('Code', { exact: true }).fill(code);
		await page.getByRole('button', { name: 'Go on' }).click();
		await expect(page).toHaveURL('/operators');
	}
});

test('sessions on other devices are listed and ended', async ({ page, browser }) => {
	const owner = await signUp(page);
	const other = await browser.newContext();
	const there = await other.newPage();
	await signIn(there, owner);
	await page.goto('/me/sessions');
	await page.getByRole('button', { name: 'End this session' }).click();
	await expect(page.getByRole('status')).toContainText('The session has ended');
	await there.goto('/operators');
	await expect(there).toHaveURL(/\/sign-in/);
	await signIn(there, owner);
	await page.reload();
	await page.getByRole('button', { name: 'Sign out everywhere, here too' }).click();
	await expect(page).toHaveURL('/sign-in?done=everywhere');
	await there.goto('/operators');
	await expect(there).toHaveURL(/\/sign-in/);
	await other.close();
});
