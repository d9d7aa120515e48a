import { describe, expect, it } from 'vitest';
import { createSite, sunPosition } from '../../../src/lib/optics';
import { sunIsUp } from '../../../src/lib/optics/instant';
import { countPlacement } from '../../../src/lib/place-search/count';
import { Judge } from '../../../src/lib/place-search/judge';
import { seasonSky } from '../../../src/lib/place-search/season-sky';
import { localDayRange, openIntervals } from '../../../src/lib/schedule';
import { placeQuestion, seasonMinutes, terraceQuestion } from '../../support/place-question';
import { fourByFour, quarryTerrace } from '../../support/plans';
import { casesFor, createRandom, randomPlan, seedFor } from '../../support/random';

describe('the sky of a season', () => {
	it('holds all minutes of the open days in which the sun is up, large and small', () => {
		const seed = seedFor('season sky', 4711);
		const random = createRandom(seed);
		for (let i = 0; i < casesFor(6); i++) {
			const plan = { ...randomPlan(random), timeZone: 'Europe/Paris' };
			const site = createSite(plan);
			const season = { from: '2027-10-20', to: '2027-11-08' };
			const open = [
				{ fromMinute: 420, toMinute: 660 },
				{ fromMinute: 780, toMinute: 1170 }
			];
			const hours = {
				weekdays: [open, open, [], open, open, open, open],
				daysOff: ['2027-10-31']
			};
			const sky = seasonSky(site, hours, season);
			let minutes = 0;
			const range = localDayRange({ timeZone: plan.timeZone, ...season });
			for (const { startMs, endMs } of openIntervals({ clock: site.clock, hours, ...range })) {
				for (let ms = startMs; ms < endMs; ms += 60_000) {
					if (sunIsUp(site, sunPosition({ instantMs: ms + 30_000, ...site }))) minutes++;
				}
			}
			const sum = (parts: readonly { minutes: number }[]) =>
				parts.reduce((all, part) => all + part.minutes, 0);
			expect(sky.minutesInAll).toBe(minutes);
			expect(sum(sky.parts)).toBeCloseTo(minutes, 6);
			sky.parts.forEach((part, at) => {
				expect(sum(sky.smaller[at]!)).toBeCloseTo(part.minutes, 6);
				expect(sky.neighbours[at]).not.toContain(at);
			});
		}
	});

	it('is empty where the sun never stands in the opening hours', () => {
		const site = createSite(quarryTerrace());
		const night = [{ fromMinute: 0, toMinute: 120 }];
		const hours = { weekdays: [night, night, night, night, night, night, night], daysOff: [] };
		const sky = seasonSky(site, hours, { from: '2027-04-01', to: '2027-04-30' });
		expect(sky).toEqual({ minutesInAll: 0, parts: [], neighbours: [], smaller: [] });
	});
});

/**
 * Parts of the sky against the engine's seconds: an hour, and besides a part of the season's sellable sun,
 * roughly 6 per cent at worst, closely 1.5 per cent.
 */
const ROUGH = 0.06;
const CLOSE = 0.015;
const BESIDES = 60;

it('judges placements as the engine counts them, roughly and closely', () => {
	const seed = seedFor('judged placements', 271828);
	const random = createRandom(seed);
	const within = (least: number, greatest: number) => least + random() * (greatest - least);
	let worstRough = 0;
	let worstClose = 0;
	let someMinutes = 0;
	for (let i = 0; i < casesFor(12); i++) {
		const plan = i % 6 === 0 ? quarryTerrace() : i % 6 === 1 ? fourByFour() : randomPlan(random);
		const question = placeQuestion(plan, {
			replaces: random() < 0.5 ? 0 : null,
			curtain: {
				lengthM: within(4, 20),
				bottomM: within(0, 1),
				topM: within(4, 9),
				dropDiameterUm: within(50, 600)
			},
			season: { from: '2027-04-01', to: '2027-04-30' }
		});
		const site = createSite(plan);
		const sky = seasonSky(site, question.pattern.hours, question.season);
		const judge = new Judge(question, site, sky);
		for (let j = 0; j < 2; j++) {
			const placement = {
				x: within(-12, 12),
				y: within(-12, 12),
				bearingDeg: within(0, 180)
			};
			const exact = seasonMinutes(question, placement);
			if (exact > 0) someMinutes++;
			const off = (minutes: number) =>
				Math.max(0, Math.abs(minutes - exact) - BESIDES) / Math.max(1, sky.minutesInAll);
			const rough = off(judge.coarseMinutes(placement));
			const close = off(judge.fineMinutes(placement));
			worstRough = Math.max(worstRough, rough);
			worstClose = Math.max(worstClose, close);
			expect(rough, `seed ${seed}, case ${i}.${j}, roughly`).toBeLessThan(ROUGH);
			expect(close, `seed ${seed}, case ${i}.${j}, closely`).toBeLessThan(CLOSE);
			// Twice the same, whatever was judged between.
			expect(judge.fineMinutes(placement)).toBe(judge.fineMinutes({ ...placement }));
		}
	}
	console.log(`judged: off by ${worstRough} roughly, ${worstClose} closely, at worst`);
	expect(someMinutes).toBeGreaterThan(0);
}, 60_000);

it('counts a curtain that is switched off as not there, and the sought one as on', () => {
	const plan = quarryTerrace();
	plan.curtains[0]!.enabled = false;
	const at = { x: -14, y: 2, bearingDeg: 0 };
	const season = { from: '2027-04-01', to: '2027-04-14' };
	const question = terraceQuestion(plan, { season });
	const before = countPlacement(question, null).openMinutes;
	const on = seasonMinutes(question, at);
	expect(countPlacement(question, at).openMinutes).toBeCloseTo(on, 6);
	expect(on).toBeGreaterThan(before);
	const site = createSite(plan);
	const judge = new Judge(question, site, seasonSky(site, question.pattern.hours, season));
	expect(Math.abs(judge.fineMinutes(at) - on)).toBeLessThan(90);
});
