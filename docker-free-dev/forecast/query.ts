import { find as zonesAt } from 'geo-tz';
import type { Hour } from './sky.ts';

/** A refusal in the service's own form: status 400, `{"error":true,"reason":...}`. */
export class Refused extends Error {}

export interface ForecastQuery {
	latitude: number;
	longitude: number;
	elevation: number | undefined;
	variables: (keyof Hour)[];
	timeZone: string;
	/** Seconds that local time is ahead of UTC now; the service uses one offset for the whole answer. */
	utcOffsetSeconds: number;
	/** First hour and end (not included), as UTC milliseconds. */
	fromMs: number;
	toMs: number;
	unixTime: boolean;
	wind: WindUnit;
	fahrenheit: boolean;
	inches: boolean;
}

export type WindUnit = 'kmh' | 'ms' | 'mph' | 'kn';

export const VARIABLES: (keyof Hour)[] = [
	'direct_normal_irradiance',
	'cloud_cover',
	'precipitation',
	'precipitation_probability',
	'temperature_2m',
	'wind_speed_10m',
	'wind_gusts_10m'
];

/** What the real service answers and this double does not: refused, so that nobody waits for it. */
const NOT_PLAYED = [
	...['current', 'daily', 'minutely_15', 'current_weather', 'models', 'bounding_box', 'run'],
	...['past_hours', 'forecast_hours', 'start_hour', 'end_hour', 'tilt', 'azimuth', 'format']
];

const DAY_MS = 86_400_000;
const HOUR_MS = 3_600_000;
const USUAL_DAYS = 7;
const MOST_DAYS = 16;
const MOST_PAST_DAYS = 92;
const OLDEST = '2016-01-01';

/**
 * Reads the query of `GET /v1/forecast`.
 * @param nowMs the present instant
 * @throws Refused with the reason that the service gives
 */
export function readQuery(search: string, nowMs: number): ForecastQuery {
	const given = new URLSearchParams(search);
	for (const name of NOT_PLAYED) {
		if (given.has(name)) throw new Refused(`This double does not play '${name}'.`);
	}
	const [latitude, longitude] = coordinates(given);
	const timeZone = readTimeZone(given.get('timezone'), latitude, longitude);
	const utcOffsetSeconds = offsetSeconds(timeZone, nowMs);
	return {
		latitude,
		longitude,
		elevation: optionalNumber(given, 'elevation'),
		variables: readVariables(given),
		timeZone,
		utcOffsetSeconds,
		...range(given, nowMs, utcOffsetSeconds),
		unixTime: choice(given, 'timeformat', ['iso8601', 'unixtime']) === 'unixtime',
		wind: choice(given, 'wind_speed_unit', ['kmh', 'ms', 'mph', 'kn']),
		fahrenheit: choice(given, 'temperature_unit', ['celsius', 'fahrenheit']) === 'fahrenheit',
		inches: choice(given, 'precipitation_unit', ['mm', 'inch']) === 'inch'
	};
}

function coordinates(given: URLSearchParams): [number, number] {
	const read = (name: string) =>
		given
			.getAll(name)
			.flatMap((text) => text.split(','))
			.filter((text) => text !== '');
	const [latitudes, longitudes] = [read('latitude'), read('longitude')];
	if (latitudes.length !== longitudes.length) {
		throw new Refused("Parameter 'latitude' and 'longitude' must have the same number of elements");
	}
	if (latitudes.length === 0) {
		throw new Refused("Parameter 'latitude' and 'longitude' must not be empty");
	}
	if (latitudes.length > 1) throw new Refused('This double answers for one place at a time.');
	const latitude = number('latitude', latitudes[0] ?? '');
	const longitude = number('longitude', longitudes[0] ?? '');
	if (Math.abs(latitude) > 90) {
		throw new Refused(`Latitude must be in range of -90 to 90°. Given: ${latitude}.`);
	}
	if (Math.abs(longitude) > 180) {
		throw new Refused(`Longitude must be in range of -180 to 180°. Given: ${longitude}.`);
	}
	return [latitude, longitude];
}

function readVariables(given: URLSearchParams): (keyof Hour)[] {
	const names = given
		.getAll('hourly')
		.flatMap((text) => text.split(','))
		.filter((text) => text !== '');
	return names.map((name) => {
		const known = VARIABLES.find((variable) => variable === name);
		if (known) return known;
		throw new Refused(
			`Data corrupted at path ''. Cannot initialize ForecastVariable from invalid String value ${name}.`
		);
	});
}

function readTimeZone(given: string | null, latitude: number, longitude: number): string {
	if (given === null || given === '') return 'GMT';
	const wanted = given === 'auto' ? (zonesAt(latitude, longitude)[0] ?? 'GMT') : given;
	try {
		new Intl.DateTimeFormat('en', { timeZone: wanted });
		return wanted;
	} catch {
		throw new Refused('Invalid timezone');
	}
}

/** Seconds that a zone's clocks are ahead of UTC at an instant. */
function offsetSeconds(timeZone: string, ms: number): number {
	const text = new Intl.DateTimeFormat('sv-SE', {
		timeZone,
		dateStyle: 'short',
		timeStyle: 'medium'
	}).format(ms);
	return Math.round(
		(Date.parse(`${text.replace(' ', 'T')}Z`) - Math.floor(ms / 1000) * 1000) / 1000
	);
}

function range(
	given: URLSearchParams,
	nowMs: number,
	offset: number
): { fromMs: number; toMs: number } {
	const days = integer(given, 'forecast_days');
	const past = integer(given, 'past_days');
	const today = Math.floor((nowMs + offset * 1000) / DAY_MS) * DAY_MS;
	const [first, last] = [given.get('start_date'), given.get('end_date')];
	if (first === null && last === null) {
		inRange('Forecast days', days, MOST_DAYS);
		inRange('Past days', past, MOST_PAST_DAYS);
		return {
			fromMs: today - (past ?? 0) * DAY_MS - offset * 1000,
			toMs: today + (days ?? USUAL_DAYS) * DAY_MS - offset * 1000
		};
	}
	if (first === null || last === null) {
		throw new Refused("Both 'start_date' and 'end_date' must be set in the url");
	}
	for (const [name, value] of [
		['past_days', past],
		['forecast_days', days]
	] as const) {
		if (value) {
			throw new Refused(
				`Parameter '${name}' is mutually exclusive with 'start_date' and 'end_date'`
			);
		}
	}
	const [from, to] = [day('start_date', first), day('end_date', last)];
	if (to < from) throw new Refused('End-date must be larger or equals than start-date');
	const oldest = Date.parse(`${OLDEST}T00:00:00Z`);
	const newest = Math.floor(nowMs / DAY_MS) * DAY_MS + (MOST_DAYS - 1) * DAY_MS;
	for (const [name, at] of [
		['start_date', from],
		['end_date', to]
	] as const) {
		if (at >= oldest && at <= newest) continue;
		const until = new Date(newest).toISOString().slice(0, 10);
		throw new Refused(`Parameter '${name}' is out of allowed range from ${OLDEST} to ${until}`);
	}
	return { fromMs: from - offset * 1000, toMs: to + DAY_MS - offset * 1000 };
}

function day(name: string, text: string): number {
	const at = /^\d{4}-\d{2}-\d{2}$/.test(text) ? Date.parse(`${text}T00:00:00Z`) : NaN;
	if (Number.isNaN(at)) throw new Refused(`Invalid date format for '${name}'. Given: ${text}`);
	return at;
}

function inRange(name: string, value: number | undefined, most: number): void {
	if (value === undefined || (value >= 0 && value <= most)) return;
	throw new Refused(`${name} is invalid. Allowed range 0 to ${most}. Given ${value}.`);
}

function number(name: string, text: string): number {
	const value = Number(text);
	if (text.trim() !== '' && Number.isFinite(value)) return value;
	throw new Refused(
		`Value was not of type 'Float' at path '${name}'. Cannot initialize Float from '${text}'.`
	);
}

function optionalNumber(given: URLSearchParams, name: string): number | undefined {
	const text = given.get(name);
	return text === null ? undefined : number(name, text);
}

function integer(given: URLSearchParams, name: string): number | undefined {
	const value = optionalNumber(given, name);
	if (value === undefined || Number.isInteger(value)) return value;
	throw new Refused(`Value was not of type 'Int' at path '${name}'.`);
}

function choice<T extends string>(given: URLSearchParams, name: string, all: [T, ...T[]]): T {
	const text = given.get(name);
	if (text === null) return all[0];
	const found = all.find((one) => one === text);
	if (found) return found;
	throw new Refused(
		`Value was not of type '${name}'. Cannot initialize from invalid String value ${text}.`
	);
}

/** The hours of a range, as UTC milliseconds. */
export function hoursOf({ fromMs, toMs }: { fromMs: number; toMs: number }): number[] {
	const hours: number[] = [];
	for (let at = fromMs; at < toMs; at += HOUR_MS) hours.push(at);
	return hours;
}
