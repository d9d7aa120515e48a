import { getPosition } from 'suncalc';
import { createSite, findWindows, stateUnderSun } from '../../../src/lib/optics';
import type { Plan } from '../../../src/lib/schemas/plan';
import { fourByFour, quarryTerrace } from '../../support/plans';
import { plainEyes, plainOpen } from '../../support/ray-casting';
import { medianTimesMs, timeMs, type Measure, type Section } from '../measure';

const MINUTES_PER_YEAR = 525_600;
const YEAR = { from: '2027-01-01', to: '2027-12-31' };
const FRAME_MS = 1000 / 60;

/** The measure that years are held against: the sun once a minute, with a new Date. */
function sunEveryMinute(plan: Plan): number {
	let sum = 0;
	const startMs = Date.UTC(2027, 0, 1);
	for (let minute = 0; minute < MINUTES_PER_YEAR; minute++) {
		sum += getPosition(new Date(startMs + minute * 60_000), plan.latitude, plan.longitude).altitude;
	}
	return sum;
}

/** The site is made anew every time: nothing is remembered from one round to the next. */
const windowsOf = (plan: Plan, range = YEAR) => findWindows({ site: createSite(plan), ...range });

function years(): Measure[] {
	const example = quarryTerrace();
	const busy = fourByFour();
	const times = medianTimesMs(
		{
			sun: () => sunEveryMinute(example),
			example: () => windowsOf(example),
			busy: () => windowsOf(busy)
		},
		5
	);
	return [
		{ name: 'sun at 525,600 minutes', value: times.sun, unit: 'ms' },
		{ name: 'year of the example plan', value: times.example, unit: 'ms' },
		{ name: 'year of the busy plan', value: times.busy, unit: 'ms' },
		{
			name: 'year of the example plan against the sun (at most 5)',
			value: times.ratios('example', 'sun'),
			unit: 'x'
		},
		{
			name: 'year of the busy plan against the sun (at most 20)',
			value: times.ratios('busy', 'sun'),
			unit: 'x'
		}
	];
}

/**
 * The ray-casting twin on the same days. It looks once a minute with rays 0.1 degree apart, which finds
 * windows of a minute and arcs to half a degree, and is not even asked for the second of the ends. Every
 * thirtieth minute is timed and counted thirty times: all of them would take a minute a day.
 */
function againstTwin(): Measure[] {
	const plan = quarryTerrace();
	const eyes = plainEyes(plan.zones[0]!);
	const days = [
		['2027-03-20', Date.UTC(2027, 2, 20)],
		['2027-12-21', Date.UTC(2027, 11, 21)]
	] as const;
	const timed = 30;
	const times = medianTimesMs(
		{
			engine: () => days.map(([date]) => windowsOf(plan, { from: date, to: date })),
			twin: () =>
				days.map(([, startMs]) => {
					let open = 0;
					for (let minute = 0; minute < 1440; minute += timed) {
						if (plainOpen(plan, eyes, startMs + minute * 60_000, 0.1)) open++;
					}
					return open;
				})
		},
		3
	);
	return [
		{ name: 'two days of the example plan', value: times.engine, unit: 'ms' },
		{
			name: 'ray-casting twin on the same days (at least 1000)',
			value: times.ratios('twin', 'engine') * timed,
			unit: 'x'
		}
	];
}

/** 64 places, two eye heights, one curtain. */
function oneCurtain(): Plan {
	const plan = quarryTerrace();
	plan.curtains = plan.curtains.slice(0, 1);
	plan.walls = [];
	plan.zones[0]!.outline = [
		[-4, -4],
		[4, -4],
		[4, 4],
		[-4, 4]
	];
	// The lattice has a point in the middle: a shifted square of 8 x 8 spacings holds 7 x 7 of them, so
	// the square is widened until 8 x 8 or more stand inside.
	plan.zones[0]!.outline[1] = [4.9, -4];
	plan.zones[0]!.outline[2] = [4.9, 4.9];
	return plan;
}

function instants(): Measure[] {
	const site = createSite(oneCurtain());
	const looks = 2000;
	const times = medianTimesMs(
		{
			state: () => {
				let share = 0;
				for (let i = 0; i < looks; i++) {
					const sun = { azimuthDeg: 80 + (i * 60) / looks, altitudeDeg: 6 + (i * 20) / looks };
					share += stateUnderSun(site, sun).zones[0]!.share;
				}
				return share;
			}
		},
		5
	);
	const stateMs = times.state / looks;
	return [
		{ name: 'eyes of the state at an instant', value: site.zones[0]!.eyes.length, unit: 'eyes' },
		{ name: 'state at an instant', value: stateMs, unit: 'ms' },
		{
			name: 'state at an instant in frames of 60 Hz (at most 0.05)',
			value: stateMs / FRAME_MS,
			unit: 'frames'
		}
	];
}

/** How the time grows when one thing is doubled: 2 is linear, less is better. */
function growth(): Measure[] {
	const month = { from: '2027-03-01', to: '2027-03-31' };
	const plan = fourByFour();
	const twoMonths = { from: '2027-03-01', to: '2027-05-01' };
	const aside = <Sheet extends { from: [number, number]; to: [number, number] }>(sheet: Sheet) => ({
		...sheet,
		from: [sheet.from[0] + 0.7, sheet.from[1] + 0.4] as [number, number],
		to: [sheet.to[0] + 0.7, sheet.to[1] + 0.4] as [number, number]
	});
	const curtains = { ...plan, curtains: [...plan.curtains, ...plan.curtains.map(aside)] };
	const walls = { ...plan, walls: [...plan.walls!, ...plan.walls!.map(aside)] };
	const [zone] = plan.zones;
	const eyes = { ...plan, zones: [{ ...zone!, eyeHeights: [1.15, 1.3, 1.5, 1.65] }] };
	const times = medianTimesMs(
		{
			once: () => windowsOf(plan, month),
			days: () => windowsOf(plan, twoMonths),
			curtains: () => windowsOf(curtains, month),
			walls: () => windowsOf(walls, month),
			eyes: () => windowsOf(eyes, month)
		},
		5
	);
	return (['days', 'curtains', 'walls', 'eyes'] as const).map((name) => ({
		name: `time with twice the ${name} (2 is linear)`,
		value: times.ratios(name, 'once'),
		unit: 'x'
	}));
}

export const windowsSection: Section = {
	name: 'windows',
	run() {
		// One year before anything counts: the code is warm then.
		timeMs(() => windowsOf(quarryTerrace()));
		return [...years(), ...againstTwin(), ...instants(), ...growth()];
	}
};
