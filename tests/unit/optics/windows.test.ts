import { describe, expect, it } from 'vitest';
import {
	createSite,
	findWindows,
	shareOverDay,
	stateAt,
	stateUnderSun,
	sunPosition,
	windowsInPieces,
	type Site
} from '../../../src/lib/optics';
import { createHorizon } from '../../../src/lib/optics/horizon';
import { leastEyesFor } from '../../../src/lib/optics/site';
import { addDays, localClock, localDayRange } from '../../../src/lib/schedule';
import type { Plan } from '../../../src/lib/schemas/plan';
import { barePlan, curtain, fourByFour, pointZone, quarryTerrace, wall } from '../../support/plans';
import { casesFor, createRandom, randomPlan, seedFor } from '../../support/random';
import { narrowedArc, plainEyes, plainOpen, plainSkyline } from '../../support/ray-casting';

const seconds = (site: Site, from: string, to = from) =>
	findWindows({ site, from, to }).map(({ windows }) =>
		windows.map(({ startMs, endMs }) => [startMs / 1000, endMs / 1000])
	);

/** Windows of the first zone from the state at every single second, two hours of margin at the end. */
function everySecond(site: Site, date: string): number[][] {
	const range = localDayRange({ timeZone: site.clock.timeZone, from: date, to: date });
	const startS = range.startMs / 1000;
	const endS = range.endMs / 1000;
	const runs: [number, number][] = [];
	for (let s = startS - 60; ; s++) {
		const last = runs.at(-1);
		if (s >= endS && !(last && last[0] < endS && s - last[1] < 60)) break;
		const sun = sunPosition({ instantMs: s * 1000, ...site });
		const quick =
			sun.altitudeDeg >= site.minimumSunAltitudeDeg &&
			sun.altitudeDeg > site.horizon.altitudeDegAt(sun.azimuthDeg);
		if (!quick || !stateUnderSun(site, sun).zones[0]!.open) continue;
		if (last && s - last[1] < 60) last[1] = s;
		else runs.push([s, s]);
	}
	return runs.filter(([a, b]) => b - a >= 60 && a >= startS && a < endS);
}

describe('windows against every second', () => {
	it('are the same to the second for random plans', () => {
		const random = createRandom(seedFor('windows', 515));
		let found = 0;
		for (let k = 0; k < casesFor(30); k++) {
			const plan = randomPlan(random);
			// One place, several heights: the share still moves in steps, and every second is affordable.
			plan.zones = [
				{ ...pointZone(random() * 4 - 2, random() * 4 - 2, 1), eyeHeights: [0.9, 1.3, 1.7] }
			];
			plan.rule.minimumShare = Math.min(plan.rule.minimumShare, 0.9);
			const site = createSite(plan);
			const thinned = {
				...site,
				zones: [
					{
						...site.zones[0]!,
						eyes: site.zones[0]!.eyes.slice(0, 3),
						leastEyes: leastEyesFor(plan.rule.minimumShare, 3)
					}
				]
			};
			const date = addDays('2027-01-01', Math.floor(random() * 365));
			const [windows] = seconds(thinned, date);
			expect(windows).toEqual(everySecond(thinned, date));
			found += windows!.length;
		}
		expect(found).toBeGreaterThan(8);
	}, 600_000);

	it('have their ends where rays say, within 2 s, for random plans', () => {
		const random = createRandom(seedFor('window ends', 99));
		let ends = 0;
		for (let k = 0; k < casesFor(400) && ends < casesFor(200); k++) {
			const plan = { ...randomPlan(random), zones: [pointZone(random(), random(), 1.5)] };
			const eyes = plainEyes(plan.zones[0]!).slice(0, 1);
			plan.rule.minimumShare = 1;
			const site = createSite(plan);
			const alone = {
				...site,
				zones: [{ ...site.zones[0]!, eyes: site.zones[0]!.eyes.slice(0, 1), leastEyes: 1 }]
			};
			for (const [startS, endS] of seconds(
				alone,
				addDays('2027-01-01', Math.floor(random() * 365))
			)[0]!) {
				const open = (s: number) => plainOpen(plan, eyes, s * 1000, 0.1, narrowedArc);
				expect([open(startS! - 2), open(startS! + 2)]).toEqual([false, true]);
				expect([open(endS! - 2), open(endS! + 2)]).toEqual([true, false]);
				ends += 2;
			}
		}
		expect(ends).toBeGreaterThanOrEqual(casesFor(100));
	}, 600_000);
});

describe('plans made to be missed', () => {
	/** An eye that sees all of the bow all round, so that only the sun's altitude and the skyline decide. */
	const roundabout = (parts: Partial<Plan> = {}) =>
		barePlan({
			curtains: [
				[
					[-9, 9],
					[9, 9]
				],
				[
					[9, 9],
					[9, -9]
				],
				[
					[9, -9],
					[-9, -9]
				],
				[
					[-9, -9],
					[-9, 9]
				]
			].map(([from, to]) =>
				curtain(from as [number, number], to as [number, number], { bottom: -50, top: 90 })
			),
			...parts
		});

	it('a notch in the skyline that the sun crosses in little over a minute', () => {
		// At azimuth 90 on the equator the sun's azimuth hardly moves; at latitude 50 it turns about 11 to
		// 12 degrees an hour in the morning, so 0.25 degrees take about 78 s.
		for (const [width, expected] of [
			[0.25, 1],
			[0.05, 0]
		] as const) {
			const plan = roundabout({
				latitude: 50,
				skyline: [
					[0, 80],
					[120 - width / 2 - 1e-6, 80],
					[120 - width / 2, 0],
					[120 + width / 2, 0],
					[120 + width / 2 + 1e-6, 80]
				]
			});
			const site = createSite(plan);
			const [windows] = seconds(site, '2027-03-20');
			expect(windows).toEqual(everySecond(site, '2027-03-20'));
			expect(windows!.length).toBe(expected);
		}
	});

	it('a picket of walls that makes the bow come and go', () => {
		const walls = Array.from({ length: 24 }, (_, i) =>
			wall([-12 + i, -15], [-12 + i + 0.5, -15], { top: 30 })
		);
		const plan = barePlan({
			latitude: 47,
			curtains: [curtain([-2, 8], [-1.6, 8], { bottom: 0.5, top: 5 }), curtain([1, 8], [1.2, 8])],
			walls,
			rule: { minimumArc: 1.5, minimumShare: 0.3, minimumSunAltitude: 2 }
		});
		const site = createSite(plan);
		let found = 0;
		for (const date of ['2027-02-10', '2027-10-05', '2027-12-21']) {
			const [windows] = seconds(site, date);
			expect(windows).toEqual(everySecond(site, date));
			found += windows!.length;
		}
		expect(found).toBeGreaterThan(3);
	}, 600_000);

	it('a curtain so narrow that the ring crosses it in a few minutes', () => {
		const plan = barePlan({
			latitude: 47,
			curtains: [curtain([-0.1, 8], [0.1, 8], { bottom: 4, top: 4.6 })],
			rule: { minimumArc: 0.5, minimumShare: 0.5, minimumSunAltitude: 2 }
		});
		const site = createSite(plan);
		const [windows] = seconds(site, '2027-10-05');
		expect(windows).toEqual(everySecond(site, '2027-10-05'));
	});

	it('a share at its threshold that flickers', () => {
		const plan = { ...fourByFour(), timeZone: 'UTC' };
		plan.rule = { ...plan.rule, minimumShare: 0.97, minimumArc: 85 };
		const site = createSite(plan);
		const thinned = {
			...site,
			zones: [
				{
					...site.zones[0]!,
					eyes: site.zones[0]!.eyes.filter((_, i) => i % 9 === 0),
					leastEyes: 10
				}
			]
		};
		for (const date of ['2027-02-20', '2027-09-14']) {
			const slow = everySecondWith(thinned, date, 10);
			expect(seconds(thinned, date)[0]).toEqual(slow);
		}
	}, 600_000);

	/** As everySecond, with the number of eyes compared: the eyes were thinned. */
	function everySecondWith(site: Site, date: string, least: number): number[][] {
		const n = site.zones[0]!.eyes.length;
		return everySecond({ ...site, minimumShare: least / n }, date);
	}
});

describe('days and dates', () => {
	const allDay: Plan = barePlan({
		curtains: [
			curtain([-40, 9], [40, 9], { bottom: -40, top: 60 }),
			curtain([-40, -9], [40, -9], { bottom: -40, top: 60 })
		],
		rule: { minimumArc: 20, minimumShare: 1, minimumSunAltitude: 1 }
	});

	it('a window under the midnight sun belongs to the date it starts on and is followed to its end', () => {
		const site = createSite({
			...allDay,
			latitude: 69.6,
			longitude: 18.9,
			timeZone: 'Europe/Oslo'
		});
		const [windows] = findWindows({ site, from: '2027-05-01', to: '2027-06-30' }).map(
			(z) => z.windows
		);
		const long = windows!.filter(({ startMs, endMs }) => endMs - startMs > 86_400_000);
		expect(long.length).toBeGreaterThan(0);
		const { startMs, endMs, date } = long[0]!;
		expect(date).toBe(localClock('Europe/Oslo').dateAt(startMs));
		// Asked from the next day on, it was open before the first midnight and is left out.
		const later = findWindows({ site, from: addDays(date, 1), to: addDays(date, 2) })[0]!.windows;
		expect(later.every((window) => window.startMs > endMs)).toBe(true);
		// Asked for its own date alone, all of it.
		const own = findWindows({ site, from: date, to: date })[0]!.windows;
		expect(own.at(-1)).toEqual(long[0]);
	});

	it('windows of a range are those of its days', () => {
		for (const [timeZone, latitude, longitude, from] of [
			['Europe/Paris', 45.9, 6.9, '2027-03-26'],
			['America/New_York', 40.7, -74, '2027-11-05'],
			['Pacific/Apia', -13.8, -171.8, '2011-12-28'],
			['America/Sao_Paulo', -23.5, -46.6, '2018-11-02'],
			['Pacific/Kiritimati', 1.9, -157.4, '2027-01-01'],
			['Australia/Lord_Howe', -31.5, 159.1, '2027-04-02']
		] as const) {
			const site = createSite({ ...allDay, latitude, longitude, timeZone });
			const to = addDays(from, 4);
			const whole = findWindows({ site, from, to })[0]!.windows;
			const days = [0, 1, 2, 3, 4].flatMap((day) => {
				const date = addDays(from, day);
				return findWindows({ site, from: date, to: date })[0]!.windows;
			});
			expect(days).toEqual(whole);
			expect(whole.length).toBeGreaterThan(3);
			for (const { date } of whole) expect(date >= from && date <= to).toBe(true);
		}
	});

	it('the day that Samoa skipped has no window', () => {
		// IANA tz: Pacific/Apia moved over the date line at the end of 29 December 2011.
		const site = createSite({
			...allDay,
			latitude: -13.8,
			longitude: -171.8,
			timeZone: 'Pacific/Apia'
		});
		expect(findWindows({ site, from: '2011-12-30', to: '2011-12-30' })[0]!.windows).toEqual([]);
		expect(
			findWindows({ site, from: '2011-12-31', to: '2011-12-31' })[0]!.windows.length
		).toBeGreaterThan(0);
	});

	it('refuses dates that are none, wrong order, too many', () => {
		const site = createSite(allDay);
		const ask = (from: string, to: string) => () => findWindows({ site, from, to });
		expect(ask('2027-02-30', '2027-03-01')).toThrow(RangeError);
		expect(ask('2027-3-1', '2027-03-01')).toThrow(RangeError);
		expect(ask('2027-03-02', '2027-03-01')).toThrow(RangeError);
		expect(ask('2027-01-01', '2030-01-06')).toThrow(RangeError);
		expect(() =>
			localDayRange({ timeZone: 'UTC', from: '2027-01-01', to: '2030-01-04' })
		).not.toThrow();
	});
});

describe('rule', () => {
	it('a lower rule never shortens a window', () => {
		const random = createRandom(seedFor('rule', 31));
		for (let k = 0; k < casesFor(25); k++) {
			const plan = randomPlan(random);
			const date = addDays('2027-01-01', Math.floor(random() * 365));
			const before = seconds(createSite(plan), date)[0]!;
			const lower = createSite({
				...plan,
				rule: {
					minimumArc: plan.rule.minimumArc * 0.8,
					minimumShare: plan.rule.minimumShare * 0.8,
					minimumSunAltitude: 0.5 + (plan.rule.minimumSunAltitude - 0.5) * 0.5
				}
			});
			const after = seconds(lower, addDays(date, -1), date)[0]!;
			for (const [start, end] of before) {
				expect(after.some(([a, b]) => a! <= start! && b! >= end!)).toBe(true);
			}
		}
	});

	it('compares the share as a fraction', () => {
		expect(leastEyesFor(0.7, 160)).toBe(112);
		expect(leastEyesFor(0.1, 30)).toBe(3);
		expect(leastEyesFor(2 / 3, 126)).toBe(84);
		expect(leastEyesFor(1, 126)).toBe(126);
		expect(leastEyesFor(1e-9, 126)).toBe(1);
		for (let n = 16; n < 200; n++)
			for (let k = 1; k <= n; k++) expect(leastEyesFor(k / n, n)).toBe(k);
	});

	it('reads the skyline linearly, around 360 too', () => {
		const skyline = quarryTerrace().skyline;
		const horizon = createHorizon(skyline);
		for (let azimuth = 0; azimuth < 360; azimuth += 0.7) {
			expect(horizon.altitudeDegAt(azimuth)).toBeCloseTo(plainSkyline(skyline, azimuth), 10);
			const { least, greatest } = horizon.boundsDeg(azimuth, 17);
			for (let turn = -17; turn <= 17; turn += 0.5) {
				const altitude = horizon.altitudeDegAt((azimuth + turn + 360) % 360);
				expect(altitude >= least - 1e-9 && altitude <= greatest + 1e-9).toBe(true);
			}
		}
		expect(createHorizon([[10, 4]]).altitudeDegAt(300)).toBe(4);
		expect(createHorizon([]).altitudeDegAt(300)).toBe(0);
	});
});

describe('peaks', () => {
	it('are the greatest over five-minute instants and both ends', () => {
		const site = createSite(quarryTerrace());
		for (const { windows } of findWindows({ site, from: '2027-03-01', to: '2027-03-04' })) {
			for (const { startMs, endMs, peakShare, peakArcDeg } of windows) {
				const instants = [startMs, endMs];
				for (let t = Math.ceil(startMs / 300_000) * 300_000; t <= endMs; t += 300_000)
					instants.push(t);
				let share = 0;
				let arc = 0;
				for (const t of instants) {
					const [zone] = stateAt(site, t).zones;
					share = Math.max(share, zone!.share);
					const having = zone!.eyes.map((eye) => eye.arcDeg).filter((a) => a >= site.minimumArcDeg);
					having.sort((a, b) => a - b);
					const middle = having.length >> 1;
					const median =
						having.length % 2 ? having[middle]! : (having[middle - 1]! + having[middle]!) / 2;
					if (having.length > 0) arc = Math.max(arc, median);
				}
				expect(peakShare).toBe(share);
				expect(peakArcDeg).toBe(arc);
			}
		}
	});
});

describe('for the interface', () => {
	it('gives a day of shares', () => {
		const site = createSite(quarryTerrace());
		const moments = shareOverDay({ site, date: '2027-03-28', stepMinutes: 30 });
		// 28 March 2027 has 23 hours in Paris.
		expect(moments.length).toBe(47);
		for (const { instantMs, shares } of moments) {
			expect(shares[0]).toBe(stateAt(site, instantMs).zones[0]!.share);
		}
		expect(() => shareOverDay({ site, date: '2027-03-28', stepMinutes: 0 })).toThrow(RangeError);
	});

	it('gives a range in pieces that add up to the whole, with progress', async () => {
		const site = createSite(quarryTerrace());
		const range = { from: '2027-03-25', to: '2027-04-09' };
		const done: number[] = [];
		const windows = [];
		for await (const piece of windowsInPieces({ site, ...range, daysPerPiece: 5 })) {
			done.push(piece.daysDone);
			windows.push(...piece.zones[0]!.windows);
			expect(piece.daysInAll).toBe(16);
		}
		expect(done).toEqual([5, 10, 15, 16]);
		expect(windows).toEqual(findWindows({ site, ...range })[0]!.windows);
	});

	it('stops when told to', async () => {
		const site = createSite(quarryTerrace());
		const stop = new AbortController();
		let pieces = 0;
		const run = async () => {
			const range = { from: '2027-01-01', to: '2027-12-31' };
			for await (const { daysDone } of windowsInPieces({ site, ...range, signal: stop.signal })) {
				pieces++;
				if (daysDone >= 14) stop.abort();
			}
		};
		await expect(run()).rejects.toThrow();
		expect(pieces).toBe(2);
	});
});
