import sharp from 'sharp';
import type { Plan } from '../../src/lib/schemas/plan.ts';
import { demoDesk, expect, expectAccessible, signIn, test } from './helpers.ts';

// The picture and the fields are in sight at once, so that nothing scrolls under a drag.
test.use({ viewport: { width: 1280, height: 1900 } });

const width = 3600;
const height = 700;
/** Row of the level, and the bearing of the picture's left edge. */
const level = 450;
const leftDeg = 180;
const pxPerRad = width / (2 * Math.PI);

/** Altitude of a skyline at a bearing, linear between its corners. */
function altitudeAt(skyline: Plan['skyline'], azimuthDeg: number): number {
	const around = [
		...skyline.map(([a, h]) => [a - 360, h] as const),
		...skyline,
		...skyline.map(([a, h]) => [a + 360, h] as const)
	];
	const after = around.findIndex(([a]) => a > azimuthDeg);
	const [[a0, h0], [a1, h1]] = [around[after - 1]!, around[after]!];
	return h0 + ((h1 - h0) * (azimuthDeg - a0)) / (a1 - a0);
}
const rowAt = (skyline: Plan['skyline'], x: number) =>
	level -
	pxPerRad * Math.tan((altitudeAt(skyline, (leftDeg + (x * 360) / width) % 360) * Math.PI) / 180);

/** A picture of hills whose outline is a skyline, once round, as a turning camera stitches it. */
async function pictureOf(skyline: Plan['skyline']): Promise<Buffer> {
	const ridge = Array.from(
		{ length: width / 5 + 1 },
		(_, i) => `${i * 5},${rowAt(skyline, i * 5)}`
	);
	return sharp(
		Buffer.from(
			`<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${height}"><rect width="100%" height="100%" fill="#9bc"/><polygon points="0,${height} ${ridge.join(' ')} ${width},${height}" fill="#453"/></svg>`
		)
	)
		.jpeg()
		.toBuffer();
}

test('a skyline is traced over a panorama with two known bearings', async ({ page }) => {
	await signIn(page, 'planner');
	const address = `${await demoDesk(page)}/sites/quarry-terrace`;
	const plan = (await (await page.request.get(`${address}/plan/1/plan.json`)).json()) as Plan;
	await page.goto(`${address}/plan/1`);
	await page.getByRole('link', { name: 'Trace it over a picture' }).click();

	// What is no picture is told at the field.
	const file = page.getByLabel('Picture', { exact: true });
	const send = (name: string, mimeType: string, buffer: Buffer) =>
		file.setInputFiles({ name, mimeType, buffer });
	await send('hills.jpg', 'image/jpeg', Buffer.from('%PDF-1.7 not a picture'));
	await page.getByRole('button', { name: 'Upload' }).click();
	await expect(page.getByText('This file is no picture that can be read.')).toBeVisible();
	await send('hills.png', 'image/png', Buffer.alloc(10 * 1024 * 1024 + 1));
	await page.getByRole('button', { name: 'Upload' }).click();
	await expect(page.getByText('A picture has at most 10 MB. This one has more.')).toBeVisible();
	await send('hills.jpg', 'image/jpeg', await pictureOf(plan.skyline));
	await page.getByRole('button', { name: 'Upload' }).click();

	const drawing = page.getByRole('application');
	await expect(drawing).toBeVisible();
	await expect(page.getByRole('button', { name: 'Trace the skyline' })).toBeDisabled();
	await expect(page.getByText('Give the bearings of both marks.')).toBeVisible();
	await page.getByLabel('Mark 1: bearing').fill('270');
	await page.getByLabel('Mark 2: bearing').fill('270');
	await expect(page.getByText('The marks must have different bearings.')).toBeVisible();
	await page.getByLabel('Mark 2: bearing').fill('90');
	await page.getByLabel('Mark 1: altitude').fill('0');
	await expect(page.getByText('The picture shows 360°.')).toBeVisible();

	// The first mark onto the level: a step by key, the rest by mouse.
	const box = (await drawing.boundingBox())!;
	const shown = box.height / height;
	const mark = page.getByRole('button', { name: 'Mark 1, bearing 270 degrees' });
	await mark.focus();
	await page.keyboard.press('Shift+ArrowDown');
	await expect(page.getByLabel('Mark 1: y')).toHaveValue(String(height / 2 + 10 / shown));
	await page.mouse.move(box.x + 900 * shown, box.y + (height / 2 + 10 / shown) * shown);
	await page.mouse.down();
	await page.mouse.move(box.x + 900 * shown, box.y + level * shown, { steps: 4 });
	await page.mouse.up();
	await expect(page.getByLabel('Mark 1: y')).toHaveValue(/^4(49|50)/);

	await page.getByRole('button', { name: 'Trace the skyline' }).click();
	await page.mouse.move(box.x + 100 * shown, box.y + rowAt(plan.skyline, 100) * shown);
	await page.mouse.down();
	for (let x = 120; x <= 2000; x += 20) {
		await page.mouse.move(box.x + x * shown, box.y + rowAt(plan.skyline, x) * shown);
	}
	await page.mouse.up();
	const corners = page.getByLabel('Traced corners');
	const drawn = (await corners.inputValue())
		.split('\n')
		.map((line) => line.split('; ').map(Number));
	expect(drawn.length).toBeGreaterThan(60);
	for (const [azimuth, altitude] of drawn) {
		// A pixel of the screen is a quarter of a degree here.
		expect(Math.abs(altitude! - altitudeAt(plan.skyline, azimuth!))).toBeLessThan(0.3);
	}

	// The keyboard's way: a place at the cross, taken out again, and the line taken back.
	await drawing.focus();
	await page.keyboard.press('Shift+ArrowRight');
	await page.keyboard.press('Enter');
	await page.keyboard.press('Backspace');
	await page.getByRole('button', { name: 'Take the line away' }).click();
	await expect(drawing).toHaveAccessibleName('The panorama: 0 places traced');
	for (let act = 0; act < 3; act++) await page.getByRole('button', { name: 'Take back' }).click();
	await expect(corners).toHaveValue(drawn.map((pair) => pair.join('; ')).join('\n'));
	await expectAccessible(page);

	await page.getByRole('button', { name: 'Keep marks and line' }).click();
	await expect(page.getByText('The marks and the line are kept.')).toBeVisible();
	await page.reload();
	await expect(drawing).toHaveAccessibleName(`The panorama: ${drawn.length} places traced`);
	await page.getByRole('button', { name: /^Put \d+ corners into a new version$/ }).click();
	await page.waitForURL(/\/plan\/\d+\?saved/);
	const lines = (await page.getByLabel('Azimuth and altitude').inputValue()).split('\n');
	expect(lines).toContain(drawn[5]!.join('; '));
	// What the line does not reach is as it was.
	expect(lines).toContain('60; 9.5');
});
