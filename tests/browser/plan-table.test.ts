import { createSite, stateAt } from '../../src/lib/optics/index.ts';
import type { Plan } from '../../src/lib/schemas/plan.ts';
import { demoDesk, expect, expectAccessible, signIn, test, type Page } from './helpers.ts';

// The whole drawing is in sight, so that nothing scrolls under a drag.
test.use({ viewport: { width: 1280, height: 1100 } });

/** Opens the table of a new version of the demo's terrace; answers its path. */
async function newTable(page: Page): Promise<string> {
	await signIn(page, 'planner');
	const desk = await demoDesk(page);
	await page.goto(`${desk}/sites/quarry-terrace/plan/1`);
	await page.getByRole('link', { name: 'Plan table' }).click();
	await expect(page.getByRole('heading', { name: 'Plan table, version 1' })).toBeVisible();
	await expect(page.getByText('A version that was live does not change')).toBeVisible();
	await expect(page.getByRole('group', { name: 'What the pointer does' })).toHaveCount(0);
	await page.getByRole('button', { name: 'Save as a new version' }).click();
	await page.waitForURL(/\/table\/\d+\?saved$/);
	const path = new URL(page.url()).pathname;
	await page.goto(`${path}?date=2027-03-18`);
	await expect(page.locator('[data-part="zones[0]"]')).toBeVisible();
	return path;
}

const part = (page: Page, path: string) => page.locator(`[data-part="${path}"]`);
const field = (page: Page, label: string) => page.getByLabel(label, { exact: true });

async function middleOf(page: Page, selector: string): Promise<{ x: number; y: number }> {
	const box = await page.locator(selector).first().boundingBox();
	if (!box) throw new Error(`${selector} is not drawn.`);
	return { x: box.x + box.width / 2, y: box.y + box.height / 2 };
}

/** Selects a part by its row in the list of what stands there. */
const choose = (page: Page, name: string) =>
	page.getByRole('region', { name: 'Numbers' }).getByRole('button', { name }).click();

/** Pixels of the drawing to a metre, from the scale bar. */
async function pxPerM(page: Page): Promise<number> {
	const mark = page.locator('[data-mark="scale"]');
	const metres = parseFloat((await mark.locator('text').textContent()) ?? '');
	const path = (await mark.locator('path').getAttribute('d')) ?? '';
	return parseFloat(/H ([\d.]+)/.exec(path)?.[1] ?? '') / metres;
}

test('mouse, touch and keyboard move, turn and resize, and every act is undone', async ({
	page
}) => {
	await newTable(page);
	const scale = await pxPerM(page);

	// Mouse: the second end of the north curtain goes four metres east, and stays on its line.
	await choose(page, 'North curtain');
	await expect(field(page, 'To x, m')).toHaveValue('8');
	const end = await page.getByRole('button', { name: 'Second end of North curtain' }).boundingBox();
	const [x, y] = [end!.x + end!.width / 2, end!.y + end!.height / 2];
	await page.mouse.move(x, y);
	await page.mouse.down();
	await page.mouse.move(x + 4 * scale, y + 3, { steps: 6 });
	await expect(page.locator('[data-measure]')).toHaveText('24.00 m · 90.0°');
	await page.mouse.up();
	await expect(field(page, 'To x, m')).toHaveValue('12');
	await expect(field(page, 'To y, m')).toHaveValue('13');

	// Escape lets go of a drag as if it had never been.
	await page.mouse.move(x + 4 * scale, y);
	await page.mouse.down();
	await page.mouse.move(x, y + 60, { steps: 4 });
	await page.keyboard.press('Escape');
	await page.mouse.up();
	await expect(field(page, 'To x, m')).toHaveValue('12');

	// Numbers lead the drawing as well.
	await field(page, 'Length, m').fill('10');
	await expect(field(page, 'To x, m')).toHaveValue('-2');
	await expect(part(page, 'curtains[1]')).toHaveAccessibleName(/10\.00 m · 90\.0°/);
	await field(page, 'Bearing, °').fill('45');
	await expect(part(page, 'curtains[1]')).toHaveAccessibleName(/45\.0°/);

	// Keyboard: Tab's target takes arrows, with Shift it turns, with Alt it grows.
	await part(page, 'curtains[0]').focus();
	await page.keyboard.press('ArrowLeft');
	await expect(field(page, 'From x, m')).toHaveValue('-15');
	await page.keyboard.press('Alt+ArrowRight');
	await expect(field(page, 'Length, m')).toHaveValue('17');
	await page.keyboard.press('Shift+ArrowRight');
	await expect(field(page, 'Bearing, °')).toHaveValue('5');
	await page.keyboard.press('Enter');
	await expect(page.getByRole('button', { name: 'First end of West curtain' })).toBeFocused();
	await page.keyboard.press('Escape');
	await page.keyboard.press('Delete');
	await expect(part(page, 'curtains[1]')).toHaveCount(0);

	// Undone to the beginning: seven acts.
	for (let act = 0; act < 7; act++) await page.keyboard.press('Control+z');
	await expect(page.locator('[data-dirty=false]')).toBeVisible();
	await expect(part(page, 'curtains[0]')).toHaveAccessibleName(/West curtain, 16\.00 m · 0\.0°/);
	await expect(part(page, 'curtains[1]')).toHaveAccessibleName(/20\.00 m · 90\.0°/);
	await page.keyboard.press('Control+Shift+z');
	await expect(part(page, 'curtains[1]')).toHaveAccessibleName(/24\.00 m/);
	await page.keyboard.press('Control+z');

	// Touch: one finger drags the zone two metres north, two fingers draw nearer.
	const touch = await page.context().newCDPSession(page);
	const zone = await middleOf(page, '[data-part="zones[0]"] polygon');
	const finger = (id: number, dx: number, dy: number) => ({ id, x: zone.x + dx, y: zone.y + dy });
	const send = (type: 'touchStart' | 'touchMove' | 'touchEnd', points: object[]) =>
		touch.send('Input.dispatchTouchEvent', { type, touchPoints: points as never });
	await send('touchStart', [finger(0, 0, 0)]);
	for (let i = 1; i <= 5; i++) await send('touchMove', [finger(0, 0, (-2 * scale * i) / 5)]);
	await send('touchEnd', []);
	await expect(field(page, 'Corner 1 y, m')).toHaveValue('-3');
	await send('touchStart', [finger(0, -20, 0), finger(1, 20, 0)]);
	await send('touchMove', [finger(0, -40, 0), finger(1, 40, 0)]);
	await send('touchEnd', []);
	expect(await pxPerM(page)).toBeCloseTo(2 * scale, 0);
	await expect(field(page, 'Corner 1 y, m')).toHaveValue('-3');
});

test('parts are drawn, corners made and taken out, and faults said at their field', async ({
	page
}) => {
	await newTable(page);
	const box = await page.getByRole('application').boundingBox();
	await page.getByRole('button', { name: 'Wall', exact: true }).click();
	await page.mouse.move(box!.x + 60, box!.y + box!.height - 120);
	await page.mouse.down();
	await page.mouse.move(box!.x + 160, box!.y + box!.height - 120, { steps: 5 });
	await page.mouse.up();
	await expect(page.getByRole('heading', { name: 'Wall 2' })).toBeVisible();
	await expect(field(page, 'Bearing, °')).toHaveValue('90');

	// The keyboard's way to a new part.
	await page.getByRole('button', { name: 'Zone', exact: true }).click();
	await page.getByRole('button', { name: 'Put a zone in the middle' }).click();
	await expect(field(page, 'Width, m')).toHaveValue('8');
	await page.getByRole('button', { name: 'New corner after corner 1 of Zone 2' }).focus();
	await page.keyboard.press('Enter');
	await expect(field(page, 'Corner 5 x, m')).toBeVisible();
	await page.getByRole('button', { name: 'Corner 2 of Zone 2', exact: true }).focus();
	await page.keyboard.press('Delete');
	await expect(field(page, 'Corner 5 x, m')).toHaveCount(0);

	// A fault is told at the thing and at its field, and keeps the plan from being saved.
	await choose(page, 'Remove Zone 2');
	await choose(page, 'West curtain');
	await field(page, 'Top, m').fill('0.1');
	await expect(field(page, 'Top, m')).toHaveAccessibleDescription('must be above bottom');
	await expect(part(page, 'curtains[0]')).toHaveAccessibleName(/has a fault/);
	await field(page, 'Bottom, m').fill('low');
	await expect(field(page, 'Bottom, m')).toHaveAccessibleDescription('must be a number');
	await page.getByRole('button', { name: /^Save version/ }).click();
	await expect(page.getByText('Not saved: 2 faults first.')).toBeVisible();
	await expectAccessible(page);
	await field(page, 'Top, m').fill('6,5');
	await field(page, 'Bottom, m').fill('0,3');
	await page.getByRole('button', { name: /^Save version/ }).click();
	await expect(page.getByText(/^Version \d+ is saved\.$/)).toBeVisible();
});

test('the spots see at every moment what the engine says', async ({ page }) => {
	const path = await newTable(page);
	const answer = await page.request.get(`${path.replace('/table/', '/plan/')}/plan.json`);
	const site = createSite((await answer.json()) as Plan);
	await page.getByText(/^Arc at each of/).click();
	for (const [time, instant] of [
		['09:20', '2027-03-18T08:20:00Z'],
		['11:45', '2027-03-18T10:45:00Z'],
		['14:00', '2027-03-18T13:00:00Z']
	] as const) {
		await field(page, 'Time, CET').fill(time);
		await field(page, 'Time, CET').blur();
		await expect(page.locator('[data-time]')).toHaveText(time);
		const { zones, sun } = stateAt(site, Date.parse(instant));
		const said = zones[0]!.eyes.map(({ arcDeg }) => `${arcDeg.toFixed(1)}°`);
		const cells = page.locator('[data-spot-table] tbody td:nth-child(n + 3)');
		await expect(cells).toHaveText(said);
		await expect(page.locator('[data-share]')).toHaveText(`${Math.round(zones[0]!.share * 100)} %`);
		await expect(page.locator('[data-why]')).toHaveText(zones[0]!.open ? /^Open/ : /^Not open/);
		await expect(page.getByText(`sun ${sun.altitudeDeg.toFixed(1)}° up`)).toBeVisible();
	}
	// The slider goes by the minute, and the date takes the sun along.
	await page.getByLabel('Time of day').focus();
	await page.keyboard.press('ArrowRight');
	await expect(page.locator('[data-time]')).toHaveText('14:01');
	await field(page, 'Date').fill('2027-07-18');
	await expect(page.getByText('Sunday 18 July')).toBeVisible();
	await expectAccessible(page);
});

test('a second editor is told, and nothing of theirs is lost', async ({ page, browser }) => {
	const path = await newTable(page);
	const other = await (await browser.newContext()).newPage();
	await signIn(other, 'owner');
	await other.goto(path);
	await expect(other.locator('[data-part="zones[0]"]')).toBeVisible();
	await choose(other, 'Terrace');
	await field(other, 'Floor, m').fill('0.4');

	await choose(page, 'West curtain');
	await field(page, 'Top, m').fill('7');
	await page.getByRole('button', { name: /^Save version/ }).click();
	await expect(page.getByText(/^Version \d+ is saved\.$/)).toBeVisible();
	// The next save goes on from there.
	await field(page, 'Top, m').fill('7.5');
	await field(page, 'Drops, µm').fill('400');
	await page.getByRole('button', { name: /^Save version/ }).click();
	await expect(page.locator('[data-dirty=false]')).toBeVisible();

	await other.getByRole('button', { name: /^Save version/ }).click();
	await expect(other.getByText(/has saved this version since you opened it/)).toBeVisible();
	await expect(field(other, 'Floor, m')).toHaveValue('0.4');

	// Both changed the west curtain's heights: that is told, the rest comes together by itself.
	await part(other, 'curtains[0]').click();
	await field(other, 'Top, m').fill('8');
	await other.getByRole('button', { name: 'Bring the two together' }).click();
	await expect(other.getByText('1 change of theirs came in')).toBeVisible();
	await expect(other.getByText('West curtain, heights: both changed it.')).toBeVisible();
	await expectAccessible(other);
	await choose(other, 'West curtain');
	await expect(field(other, 'Top, m')).toHaveValue('8');
	await expect(field(other, 'Drops, µm')).toHaveValue('400');
	await other.getByRole('button', { name: 'Take theirs: West curtain, heights' }).click();
	await expect(field(other, 'Top, m')).toHaveValue('7.5');
	await part(other, 'zones[0]').click();
	await expect(field(other, 'Floor, m')).toHaveValue('0.4');

	// Who leaves with unsaved work is asked, and may stay.
	other.once('dialog', (dialog) => void dialog.dismiss());
	await other.getByRole('link', { name: 'Plan in tables' }).click();
	expect(new URL(other.url()).pathname).toBe(path);
	await other.getByRole('button', { name: 'Save as a new version' }).click();
	await other.waitForURL(/\?saved$/);
	await expect(other.getByText(/^Saved as version \d+\.$/)).toBeVisible();
	await choose(other, 'Terrace');
	await expect(field(other, 'Floor, m')).toHaveValue('0.4');
	await other.context().close();
});

test('every frame of a drag shows its own moment, with nothing asked of the server', async ({
	page
}) => {
	await newTable(page);
	await choose(page, 'Terrace');
	await field(page, 'Width, m').fill('16');
	await expect(page.locator('[data-spot]')).toHaveCount(77);
	await page.getByRole('application').focus();
	await page.keyboard.press('Escape');
	const asked: string[] = [];
	page.on('request', (request) => asked.push(request.url()));
	const shown = await page.evaluate(async () => {
		const slider = document.querySelector<HTMLInputElement>('input[aria-label="Time of day"]')!;
		const times: string[] = [];
		for (let minute = 480; minute < 720; minute++) {
			slider.value = String(minute);
			slider.dispatchEvent(new Event('input', { bubbles: true }));
			await new Promise(requestAnimationFrame);
			times.push(document.querySelector('[data-time]')!.textContent ?? '');
		}
		return times;
	});
	expect(shown[0]).toBe('08:00');
	expect(shown.at(-1)).toBe('11:59');
	expect(new Set(shown).size).toBe(240);

	await choose(page, 'North curtain');
	const scale = await pxPerM(page);
	const { x, y } = await middleOf(page, '[data-part="curtains[1]"] line');
	await page.mouse.move(x, y);
	await page.mouse.down();
	for (let metres = 1; metres <= 4; metres++) {
		await page.mouse.move(x, y - metres * scale);
		await expect(field(page, 'From y, m')).toHaveValue(String(13 + metres));
	}
	await page.mouse.up();
	expect(asked).toEqual([]);
});
