import { spawn } from 'node:child_process';
import { afterAll, afterEach, beforeAll, expect, test } from 'vitest';
import { airMass, clearDirectNormal } from '../../../docker-free-dev/forecast/clear-sky.ts';
import { startForecastDouble } from '../../../docker-free-dev/forecast/server.ts';
import { inProject, typescriptArgs } from '../../../docker-free-dev/lib/paths.ts';
import type { RunningDouble } from '../../../docker-free-dev/lib/http-double.ts';

interface Forecast {
	latitude: number;
	longitude: number;
	generationtime_ms: number;
	utc_offset_seconds: number;
	timezone: string;
	timezone_abbreviation: string;
	elevation: number;
	hourly_units: Record<string, string>;
	hourly: { time: (string | number)[] } & Record<string, number[]>;
}

const ALL =
	'direct_normal_irradiance,cloud_cover,precipitation,precipitation_probability,temperature_2m,wind_speed_10m,wind_gusts_10m';
const PLACE = 'latitude=45.9312&longitude=6.8745';
const DAY = new Date(Date.now() + 2 * 86_400_000).toISOString().slice(0, 10);
const ONE_DAY = `${PLACE}&hourly=${ALL}&start_date=${DAY}&end_date=${DAY}`;
/** Days go by the sun at the place: the first hours of a day in UTC are still the night before. */
const EARLY_HOURS = 2;

let double: RunningDouble;
beforeAll(async () => {
	double = await startForecastDouble({ port: 0 });
});
afterAll(() => double.close());
afterEach(() => post('reset', []));

const ask = (query: string, signal?: AbortSignal) =>
	fetch(`${double.address}/v1/forecast?${query}`, { signal: signal ?? null });

async function forecast(query: string): Promise<Forecast> {
	const response = await ask(query);
	expect(response.status).toBe(200);
	return (await response.json()) as Forecast;
}

const post = (name: string, body: unknown) =>
	fetch(`${double.address}/_double/${name}`, { method: 'POST', body: JSON.stringify(body) });

async function laid(...scripts: object[]): Promise<void> {
	expect((await post('sky', scripts)).status).toBe(200);
}

const column = (answer: Forecast, name: string): number[] => answer.hourly[name] ?? [];

test('answers in the form of the public service: units, times and columns of one length', async () => {
	const answer = await forecast(`${PLACE}&hourly=${ALL}`);
	expect(answer.hourly_units).toEqual({
		time: 'iso8601',
		direct_normal_irradiance: 'W/m²',
		cloud_cover: '%',
		precipitation: 'mm',
		precipitation_probability: '%',
		temperature_2m: '°C',
		wind_speed_10m: 'km/h',
		wind_gusts_10m: 'km/h'
	});
	expect(answer).toMatchObject({
		utc_offset_seconds: 0,
		timezone: 'GMT',
		timezone_abbreviation: 'GMT'
	});
	// Seven days from midnight, on the hour, and the nearest point of a grid in place of our own.
	expect(answer.hourly.time).toHaveLength(168);
	expect(answer.hourly.time[0]).toMatch(/^\d{4}-\d{2}-\d{2}T00:00$/);
	expect([answer.latitude, answer.longitude]).toEqual([45.94, 6.88]);
	for (const name of ALL.split(',')) expect(column(answer, name)).toHaveLength(168);
});

test('the sky of a place and day is the same whenever, in whatever zone and unit it is asked for', async () => {
	const first = await forecast(ONE_DAY);
	const again = await forecast(ONE_DAY);
	expect(again.hourly).toEqual(first.hourly);
	const utc = await forecast(`${PLACE}&hourly=cloud_cover&forecast_days=5&timeformat=unixtime`);
	const local = await forecast(
		`${PLACE}&hourly=cloud_cover&forecast_days=5&timeformat=unixtime&timezone=Asia%2FKolkata`
	);
	// India is ahead by five hours and a half: only what falls on the same instants can be compared.
	expect(local.utc_offset_seconds).toBe(19_800);
	expect(local.timezone_abbreviation).toBe('GMT+5:30');
	const auto = await forecast(
		`${PLACE}&hourly=cloud_cover&forecast_days=5&timeformat=unixtime&timezone=auto`
	);
	expect(auto.timezone).toBe('Europe/Paris');
	const byTime = new Map(utc.hourly.time.map((at, i) => [at, column(utc, 'cloud_cover')[i]]));
	const shared = auto.hourly.time
		.map((at, i) => [byTime.get(at), column(auto, 'cloud_cover')[i]])
		.filter(([there]) => there !== undefined);
	expect(shared.length).toBeGreaterThan(90);
	for (const [there, here] of shared) expect(here).toBe(there);
});

test('wind, temperature and rain come in the unit that is asked for', async () => {
	await laid({ date: DAY, sky: 'gale' });
	const kmh = await forecast(ONE_DAY);
	const other = await forecast(
		`${ONE_DAY}&wind_speed_unit=ms&temperature_unit=fahrenheit&precipitation_unit=inch`
	);
	expect(other.hourly_units).toMatchObject({
		wind_speed_10m: 'm/s',
		temperature_2m: '°F',
		precipitation: 'inch'
	});
	column(kmh, 'wind_gusts_10m').forEach((gust, i) => {
		expect(column(other, 'wind_gusts_10m')[i]).toBeCloseTo(gust / 3.6, 1);
		if (i < EARLY_HOURS) return;
		// A gale: Beaufort 8 begins at 62 km/h (WMO).
		expect(column(kmh, 'wind_speed_10m')[i]).toBeGreaterThanOrEqual(62);
		expect(gust).toBeGreaterThan(90);
	});
	const celsius = column(kmh, 'temperature_2m')[12] ?? NaN;
	expect(column(other, 'temperature_2m')[12]).toBeCloseTo(celsius * 1.8 + 32, 0);
});

test('the clear beam follows the sun: air mass and irradiance of the published formulas', () => {
	// Kasten and Young, Appl. Opt. 28, 4735 (1989): 37.92 at the horizon; 1 overhead.
	expect(airMass(0)).toBeCloseTo(37.92, 2);
	expect(airMass(90)).toBeCloseTo(1, 3);
	// Meinel and Meinel (1976), from memory: 1353 x 0.7^(AM^0.678).
	expect(clearDirectNormal(90)).toBeCloseTo(1353 * 0.7, 0);
	expect(clearDirectNormal(-0.1)).toBe(0);
});

test('scripted skies decide what the beam does', async () => {
	const beam = async (sky: string) => {
		await laid({ date: DAY, latitude: 45.9312, longitude: 6.8745, sky });
		return column(await forecast(ONE_DAY), 'direct_normal_irradiance');
	};
	const clear = await beam('clear');
	const broken = await beam('broken');
	const overcast = await beam('overcast');
	expect(clear[0]).toBe(0);
	// WMO-No. 8: the sun shines at 120 W/m² of direct beam and more.
	expect(clear[12]).toBeGreaterThan(400);
	expect(clear[12]).toBeLessThan(1353);
	clear.forEach((most, i) => expect(broken[i]).toBeLessThanOrEqual(most));
	expect(broken[12]).toBeGreaterThan(0);
	overcast.forEach((value) => expect(value).toBeLessThan(120));
	const rain = column(await forecast(ONE_DAY), 'precipitation_probability');
	rain.slice(EARLY_HOURS).forEach((chance) => expect(chance).toBeGreaterThanOrEqual(55));
});

test('a script holds for its day and place alone, the latest wins, and a reset forgets all', async () => {
	const before = await forecast(ONE_DAY);
	await laid({ date: 'all', sky: 'overcast' }, { date: DAY, sky: 'clear' });
	const noons = column(
		await forecast(`${PLACE}&hourly=cloud_cover&forecast_days=5`),
		'cloud_cover'
	).filter((_, i) => i % 24 === 12);
	expect(noons.map((cloud) => (cloud < 50 ? 'clear' : 'overcast'))).toEqual([
		'overcast',
		'overcast',
		'clear',
		'overcast',
		'overcast'
	]);
	await post('reset', []);
	await laid({ date: DAY, latitude: -33, longitude: 151, sky: 'gale' });
	expect((await forecast(ONE_DAY)).hourly).toEqual(before.hourly);
});

test('an outage answers 502 without JSON, and only for the days it was laid for', async () => {
	await laid({ date: DAY, sky: 'outage' });
	const down = await ask(ONE_DAY);
	expect(down.status).toBe(502);
	expect(down.headers.get('content-type')).toContain('text/html');
	expect((await ask(`${PLACE}&hourly=cloud_cover&forecast_days=1`)).status).toBe(200);
	await post('reset', []);
	expect((await ask(ONE_DAY)).status).toBe(200);
});

test('a slow service holds its answer back until the caller gives up', async () => {
	await laid({ date: 'all', sky: 'slow', delayMs: 60_000 });
	await expect(ask(ONE_DAY, AbortSignal.timeout(100))).rejects.toThrow(/timeout|aborted/);
	await laid({ date: 'all', sky: 'slow', delayMs: 30 });
	expect((await ask(ONE_DAY)).status).toBe(200);
});

test('the times are local by the one offset of today, as the service does', async () => {
	const answer = await forecast(`${ONE_DAY}&timezone=America%2FNew_York`);
	expect([-18_000, -14_400]).toContain(answer.utc_offset_seconds);
	expect(answer.hourly.time[0]).toBe(`${DAY}T00:00`);
	const unix = await forecast(`${ONE_DAY}&timezone=America%2FNew_York&timeformat=unixtime`);
	expect(unix.hourly_units.time).toBe('unixtime');
	expect(unix.hourly.time[0]).toBe(Date.parse(`${DAY}T00:00Z`) / 1000 - answer.utc_offset_seconds);
});

test.each([
	['latitude=45', 'must have the same number of elements'],
	['', 'must not be empty'],
	['latitude=95&longitude=0', 'Latitude must be in range of -90 to 90°. Given: 95.'],
	['latitude=5&longitude=200', 'Longitude must be in range of -180 to 180°'],
	['latitude=north&longitude=0', "'Float' at path 'latitude'"],
	[`${PLACE}&hourly=cloud_cover,sunniness`, 'invalid String value sunniness'],
	[`${PLACE}&hourly=cloud_cover&timezone=Mist%2FGarden`, 'Invalid timezone'],
	[`${PLACE}&forecast_days=17`, 'Forecast days is invalid. Allowed range 0 to 16. Given 17.'],
	[`${PLACE}&start_date=${DAY}`, "Both 'start_date' and 'end_date' must be set"],
	[`${PLACE}&start_date=${DAY}&end_date=2020-01-01`, 'End-date must be larger'],
	[`${PLACE}&start_date=${DAY}&end_date=2099-01-01`, "'end_date' is out of allowed range"],
	[`${PLACE}&start_date=${DAY}&end_date=${DAY}&forecast_days=3`, 'mutually exclusive'],
	[`${PLACE}&wind_speed_unit=knots`, 'invalid String value knots'],
	[`${PLACE}&daily=sunrise`, "does not play 'daily'"]
])('a wrong query %j is refused with 400 and a reason', async (query, reason) => {
	const response = await ask(query);
	expect(response.status).toBe(400);
	const body = (await response.json()) as { error: boolean; reason: string };
	expect(body.error).toBe(true);
	expect(body.reason).toContain(reason);
});

test.each([
	[{ date: 'tomorrow', sky: 'clear' }, 'date'],
	[{ date: DAY, sky: 'sunny' }, 'sky is one of'],
	[{ sky: 'clear', latitude: 3 }, 'together'],
	[{ sky: 'clear', colour: 'red' }, 'Unknown: colour']
])('a wrong script %j is refused and lays nothing down', async (script, reason) => {
	const response = await post('sky', [{ sky: 'gale' }, script]);
	expect(response.status).toBe(400);
	expect(((await response.json()) as { reason: string }).reason).toContain(reason);
	expect(await (await fetch(`${double.address}/_double/sky`)).json()).toEqual([]);
});

test('it starts alone from the command line, says where, and stops when asked', async () => {
	const child = spawn(
		process.execPath,
		[...typescriptArgs(), inProject('docker-free-dev/double.ts'), 'forecast', '--port', '0'],
		{ stdio: ['ignore', 'pipe', 'inherit'] }
	);
	const ended = new Promise((resolve) => child.once('exit', (code) => resolve(code)));
	const address = await new Promise<string>((resolve) => {
		child.stdout.on('data', (chunk: Buffer) => {
			const found = /http:\/\/\S+/.exec(chunk.toString());
			if (found) resolve(found[0]);
		});
	});
	const here = await forecast(ONE_DAY);
	const there = await fetch(`${address}/v1/forecast?${ONE_DAY}`);
	expect(((await there.json()) as Forecast).hourly).toEqual(here.hourly);
	child.kill('SIGTERM');
	expect(await ended).toBe(0);
});
