import { chromium, type Browser, type Page } from '@playwright/test';
import type { Plan } from '../../../src/lib/schemas/plan';
import { fourByFour, quarryTerrace } from '../../support/plans';
import { serveFrames } from '../frames/serve';
import { median, type Measure, type Section } from '../measure';

/** The table is to stay above 50 frames a second, which a frame of 20 ms just does not. */
const FRAME_MS = 1000 / 50;
const STEPS = 240;

/** Milliseconds between the frames of one run. */
interface Frames {
	medianMs: number;
	/** What 95 in 100 keep to. */
	p95Ms: number;
	perSecond: number;
	/** Part of the frames that took longer than 20 ms. */
	late: number;
}

/** A terrace with at least 64 spots: the lattice takes 64 for the box, so that a rectangle has more. */
function withManySpots(plan: Plan): Plan {
	const zone = plan.zones[0]!;
	const outline: [number, number][] = [
		[-8, -5],
		[8, -5],
		[8, 5],
		[-8, 5]
	];
	return { ...plan, zones: [{ ...zone, outline }] };
}

async function open(
	browser: Browser,
	url: string,
	shown: { what: 'table' | 'year' | 'nothing'; plan: Plan }
): Promise<Page> {
	const page = await browser.newPage({ viewport: { width: 1280, height: 1100 } });
	// The runner's compiler names functions by a helper that the page does not have.
	await page.addInitScript('globalThis.__name = (named) => named');
	await page.addInitScript((value) => Object.assign(window, { shown: value }), shown);
	await page.goto(url);
	return page;
}

async function framesWhile(page: Page, going: () => Promise<unknown>): Promise<Frames> {
	await page.evaluate(() => {
		const times: number[] = [];
		Object.assign(window, { frameTimes: times });
		const tick = (now: number) => {
			times.push(now);
			requestAnimationFrame(tick);
		};
		requestAnimationFrame(tick);
	});
	await going();
	const at = await page.evaluate(() => (window as unknown as { frameTimes: number[] }).frameTimes);
	const between = at.slice(6).map((ms, i) => ms - at[i + 5]!);
	const sorted = [...between].sort((a, b) => a - b);
	const spanMs = between.reduce((sum, ms) => sum + ms, 0);
	return {
		medianMs: median(between),
		p95Ms: sorted[Math.floor(0.95 * (sorted.length - 1))]!,
		perSecond: (1000 * between.length) / spanMs,
		late: between.filter((ms) => ms > FRAME_MS).length / between.length
	};
}

/** Steps as fast as the page takes them: the browser hands out moves once a frame. */
const inSteps = (step: (index: number) => Promise<unknown>) => async () => {
	for (let index = 0; index < STEPS; index++) await step(index);
};

const circle = (index: number) => [80 * Math.sin(index / 24), 40 * Math.sin(index / 18)] as const;

async function mouseFrames(page: Page, at: { x: number; y: number }): Promise<Frames> {
	await page.mouse.move(at.x, at.y);
	await page.mouse.down();
	const frames = await framesWhile(
		page,
		inSteps((index) => {
			const [dx, dy] = circle(index);
			return page.mouse.move(at.x + dx, at.y + dy);
		})
	);
	await page.mouse.up();
	return frames;
}

async function touchFrames(page: Page, at: { x: number; y: number }): Promise<Frames> {
	const touch = await page.context().newCDPSession(page);
	const send = (type: 'touchStart' | 'touchMove' | 'touchEnd', points: object[]) =>
		touch.send('Input.dispatchTouchEvent', { type, touchPoints: points as never });
	await send('touchStart', [{ ...at, id: 0 }]);
	const frames = await framesWhile(
		page,
		inSteps((index) => {
			const [dx, dy] = circle(index);
			return send('touchMove', [{ id: 0, x: at.x + dx, y: at.y + dy }]);
		})
	);
	await send('touchEnd', []);
	return frames;
}

/** The time of day, minute by minute, as its slider sends it. */
const timeFrames = (page: Page) =>
	framesWhile(page, () =>
		page.evaluate(async (steps) => {
			const slider = document.querySelector<HTMLInputElement>('input[aria-label="Time of day"]')!;
			for (let index = 0; index < steps; index++) {
				slider.value = String(480 + index);
				slider.dispatchEvent(new Event('input', { bubbles: true }));
				await new Promise(requestAnimationFrame);
			}
		}, STEPS)
	);

async function tableFrames(browser: Browser, url: string, plan: Plan) {
	const page = await open(browser, url, { what: 'table', plan });
	await page.locator('[data-part="zones[0]"]').waitFor();
	const spots = await page.locator('[data-spot]').count();
	const box = (await page.locator('[data-part="curtains[1]"] line').first().boundingBox())!;
	const at = { x: box.x + box.width / 2, y: box.y + box.height / 2 };
	const time = await timeFrames(page);
	const mouse = await mouseFrames(page, at);
	await page.keyboard.press('Control+z');
	const touch = await touchFrames(page, at);
	await page.close();
	return { spots, time, mouse, touch };
}

/**
 * Milliseconds from the question to the first days of a year as the page has them, and to the last: with
 * the worker being fetched and started, and without.
 */
async function yearTimes(browser: Browser, url: string, plan: Plan) {
	const page = await open(browser, url, { what: 'year', plan });
	await page.waitForFunction(() => performance.getEntriesByName('year sheet: year').length > 0);
	const [cold, warm, all] = await page.evaluate(() => {
		const [first, year] = ['first', 'year'].map(
			(what) => performance.getEntriesByName(`year sheet: ${what}`)[0] as PerformanceMeasure
		);
		const { workerMs } = first!.detail as { workerMs: number };
		return [first!.duration, workerMs, year!.duration];
	});
	await page.close();
	return { coldMs: cold!, warmMs: warm!, allMs: all! };
}

async function run(): Promise<Measure[]> {
	const { url, close } = await serveFrames();
	const browser = await chromium.launch({
		executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium',
		args: ['--no-sandbox', '--disable-gpu', '--disable-background-networking', '--disable-quic']
	});
	try {
		const blank = await open(browser, url, { what: 'nothing', plan: quarryTerrace() });
		const still = await mouseFrames(blank, { x: 640, y: 500 });
		await blank.close();
		const measures: Measure[] = [
			{ name: 'frames a second of an empty page', value: still.perSecond, unit: 'frames/s' }
		];
		for (const [name, plan] of [
			['example plan', withManySpots(quarryTerrace())],
			['busy plan', withManySpots(fourByFour())]
		] as const) {
			const { spots, ...acts } = await tableFrames(browser, url, plan);
			measures.push({ name: `spots of the ${name}`, value: spots, unit: 'spots' });
			for (const [act, frames] of Object.entries(acts)) {
				const of = `${name}, ${act} drag`;
				measures.push(
					{ name: `${of} (above 50)`, value: frames.perSecond, unit: 'frames/s' },
					{ name: `${of}, middle frame`, value: frames.medianMs, unit: 'ms' },
					{ name: `${of}, 95 in 100 frames`, value: frames.p95Ms, unit: 'ms' },
					{ name: `${of}, frames over 20 ms`, value: 100 * frames.late, unit: '%' },
					{
						name: `${of}, frames to those of an empty page`,
						value: frames.perSecond / still.perSecond,
						unit: 'x'
					}
				);
			}
			const { coldMs, warmMs, allMs } = await yearTimes(browser, url, plan);
			measures.push(
				{ name: `${name}, year sheet opened, first days`, value: coldMs, unit: 'ms' },
				{ name: `${name}, year sheet, first days in a running worker`, value: warmMs, unit: 'ms' },
				{ name: `${name}, year sheet opened, whole year`, value: allMs, unit: 'ms' }
			);
		}
		return measures;
	} finally {
		await browser.close();
		await close();
	}
}

/**
 * Frames of the plan table under mouse, touch and the time of day, and the year sheet's first days, in a
 * real browser with the components built as for production.
 */
export const framesSection: Section = { name: 'frames', run };
