import {
	appCode,
	expect,
	letterTo,
	linkIn,
	newAddress,
	openPersonMenu,
	PASSWORD,
	signIn,
	signUp,
	test,
	type Page
} from './helpers.ts';

async function invite(page: Page, email: string, role: string): Promise<string> {
	await page.getByRole('link', { name: 'Members' }).click();
	const form = page.getByRole('region', { name: 'Invite somebody' });
	await form.getByLabel('E-mail address').fill(email);
	await form.getByLabel('Role').selectOption(role);
	await form.getByRole('button', { name: 'Send the invitation' }).click();
	await expect(form.getByRole('status')).toContainText(`A letter is on its way to ${email}`);
	return linkIn(await letterTo(email, /^Join/));
}

test('somebody is invited, joins, is given another role and is removed', async ({
	page,
	browser
}) => {
	const { operatorName } = await signUp(page);
	const email = newAddress();
	const link = await invite(page, email, 'planner');
	const open = page.getByRole('region', { name: 'Open invitations' });
	await expect(open.getByText(email, { exact: true })).toBeVisible();

	const context = await browser.newContext();
	const there = await context.newPage();
	await there.goto(link);
	await expect(there.getByRole('heading', { name: `Join ${operatorName}` })).toBeVisible();
	await there.getByLabel('Your name').fill('Pia Planner');
	await there.getByLabel('Password').fill(PASSWORD);
	await there.getByRole('button', { name: 'Join' }).click();
	await expect(there).toHaveURL(/\/desk\//);
	const desk = there.url();

	await page.reload();
	await page.getByRole('combobox', { name: 'Role of Pia Planner' }).selectOption('bookkeeper');
	await page.getByRole('button', { name: 'Save role of Pia Planner' }).click();
	await expect(page.getByRole('status').first()).toContainText('The role is changed');
	await there.reload();
	await expect(there.getByRole('banner').getByText('Pia Planner · bookkeeper')).toBeVisible();

	await page.locator('summary', { hasText: /Remove\s*Pia Planner/ }).click();
	await page.getByRole('button', { name: 'Remove Pia Planner' }).click();
	await expect(page.getByRole('status').first()).toContainText('The member is removed');
	const answer = await there.goto(desk);
	expect(answer?.status()).toBe(404);
	await context.close();

	await page.getByRole('link', { name: 'Trail' }).click();
	for (const act of [
		'member: invited',
		'member: joined',
		'member: role changed',
		'member: removed'
	]) {
		await expect(page.getByText(act)).toBeVisible();
	}
});

test('an invitation is withdrawn, and its letter is of no more use', async ({ page, browser }) => {
	await signUp(page);
	const email = newAddress();
	const link = await invite(page, email, 'steward');
	await page.getByRole('button', { name: `Withdraw the invitation to ${email}` }).click();
	await expect(page.getByRole('status').first()).toContainText('The invitation is withdrawn');
	const context = await browser.newContext();
	const there = await context.newPage();
	await there.goto(link);
	await expect(there.getByRole('heading', { name: 'no longer works' })).toBeVisible();
	await context.close();
});

test('the last owner is told why leaving does not work', async ({ page }) => {
	await signUp(page);
	await page.getByRole('link', { name: 'Members' }).click();
	await page.getByText(/^Leave /).click();
	await page.getByRole('button', { name: 'Give up my role' }).click();
	await expect(page.getByRole('status').first()).toContainText('keeps at least one owner');
});

test('a person with roles at two operators goes from one to the other', async ({ page }) => {
	const first = await signUp(page);
	const second = `Second ${first.operatorName}`;
	await openPersonMenu(page);
	await page.getByRole('link', { name: 'Your operators' }).click();
	await page.getByText('Open another operator').click();
	await page.getByLabel('Name of the organisation').fill(second);
	await page.getByRole('button', { name: 'Open it' }).click();
	await expect(page.getByRole('link', { name: second, exact: true })).toBeVisible();
	await openPersonMenu(page);
	await page.getByRole('link', { name: 'Your operators' }).click();
	await page.getByRole('link', { name: new RegExp(`^${first.operatorName}`) }).click();
	await expect(page.getByRole('link', { name: first.operatorName, exact: true })).toBeVisible();
	await expect(page.getByRole('link', { name: second })).toHaveCount(0);
});

test('an operator that wants a second step of all sends its members to turn one on', async ({
	page
}) => {
	const { operatorName } = await signUp(page);
	await page.getByRole('link', { name: 'Settings' }).click();
	await page.getByLabel('All members need a second step').check();
	await page.getByRole('button', { name: 'Save' }).click();
	// It holds at once, for the owner who asked for it as well.
	await expect(page.getByText('asks for a second step of all its members')).toBeVisible();
	await expect(page).toHaveURL(/\/me\/second-step\?for=/);
	const key = (await page.locator('code').first().textContent()) ?? '';
	await page.getByLabel('Code that the app shows').fill(appCode(key));
	await page.getByRole('button', { name: 'Turn the second step on' }).click();
	await page.getByRole('link', { name: 'Go on to the operator' }).click();
	await expect(page.getByRole('link', { name: operatorName })).toBeVisible();
});

test('the platform suspends an operator and opens it again', async ({ page, browser }) => {
	const owner = await signUp(page);
	const desk = page.url();
	const context = await browser.newContext();
	const admin = await context.newPage();
	await signIn(admin, 'owner');
	await admin.goto(`/platform?search=${encodeURIComponent(owner.operatorName)}`);
	await admin.locator('summary', { hasText: owner.operatorName }).click();
	await admin.getByLabel('Reason').fill('Nobody answers');
	await admin.getByRole('button', { name: `Suspend ${owner.operatorName}` }).click();
	await expect(admin.getByRole('status').first()).toContainText('The operator is suspended');
	expect((await page.goto(desk))?.status()).toBe(403);
	await expect(page.getByText('is suspended')).toBeVisible();
	await admin.getByRole('button', { name: /^Open again/ }).click();
	await expect(admin.getByRole('status').first()).toContainText('open again');
	expect((await page.goto(desk))?.status()).toBe(200);
	await context.close();
});
