import { createHash } from 'node:crypto';
import { clearDirectNormalOfHour } from './clear-sky.ts';
import type { Scripts, WeatherName } from './scripts.ts';

/** The weather of one hour, in the service's own units. */
export interface Hour {
	/** W/m², mean of the hour before. */
	direct_normal_irradiance: number;
	/** Per cent. */
	cloud_cover: number;
	/** mm, sum of the hour before. */
	precipitation: number;
	/** Per cent. */
	precipitation_probability: number;
	/** Degrees Celsius. */
	temperature_2m: number;
	/** km/h. */
	wind_speed_10m: number;
	/** km/h, greatest of the hour before. */
	wind_gusts_10m: number;
}

export interface Place {
	latitude: number;
	longitude: number;
}

interface Kind {
	/** Cloud cover in per cent between which the day moves. */
	cloud: [number, number];
	/** Chance of rain in per cent, least and greatest. */
	rainChance: [number, number];
	/** Wind in km/h. */
	wind: [number, number];
	gustFactor: number;
}

const KINDS: Record<WeatherName, Kind> = {
	clear: { cloud: [0, 8], rainChance: [0, 2], wind: [3, 12], gustFactor: 1.6 },
	broken: { cloud: [35, 75], rainChance: [5, 25], wind: [8, 20], gustFactor: 1.8 },
	overcast: { cloud: [95, 100], rainChance: [55, 95], wind: [8, 24], gustFactor: 1.7 },
	gale: { cloud: [20, 50], rainChance: [5, 30], wind: [62, 74], gustFactor: 1.5 }
};

/** How often each kind comes when nobody scripts the day: a hash below the bound chooses it. */
const SHARES: [WeatherName, number][] = [
	['clear', 0.45],
	['broken', 0.75],
	['overcast', 0.97],
	['gale', 1]
];

/** A number in [0, 1) that is the same for the same words, on every machine and every day. */
export function invented(...words: (string | number)[]): number {
	const digest = createHash('sha256').update(words.join('|')).digest();
	return digest.readUInt32BE(0) / 2 ** 32;
}

/**
 * The day at a place on which an instant falls, by its mean solar time: the weather of an instant
 * must not hang on the time zone in which somebody asks for it.
 */
export function dayAt(ms: number, longitude: number): string {
	return new Date(ms + (longitude / 15) * 3_600_000).toISOString().slice(0, 10);
}

/** The invented kind of weather of a day at a place, unless it is scripted. */
export function kindOfDay(date: string, place: Place, scripts: Scripts): WeatherName {
	const scripted = scripts.weather(date, place.latitude, place.longitude);
	if (scripted) return scripted;
	const draw = invented('kind', place.latitude, place.longitude, date);
	return SHARES.find(([, bound]) => draw < bound)?.[0] ?? 'clear';
}

/** The weather of the hour that ends at `endMs`. */
export function weatherOfHour(endMs: number, place: Place, scripts: Scripts): Hour {
	const { latitude, longitude } = place;
	// The middle of the hour says to which day it belongs.
	const middleMs = endMs - 1_800_000;
	const date = dayAt(middleMs, longitude);
	const name = kindOfDay(date, place, scripts);
	const kind = KINDS[name];
	const draw = (what: string) => invented(what, latitude, longitude, endMs);
	const between = ([least, most]: [number, number], what: string) =>
		least + (most - least) * draw(what);

	const cloud = Math.round(between(kind.cloud, 'cloud'));
	const chance = Math.round(between(kind.rainChance, 'rain'));
	const wet = draw('wet') * 100 < chance;
	const wind = between(kind.wind, 'wind');
	// A full cover lets no beam through; under less, the beam comes through the gaps.
	const beam = clearDirectNormalOfHour(endMs, latitude, longitude) * (1 - cloud / 100);
	return {
		direct_normal_irradiance: tenth(beam),
		cloud_cover: cloud,
		precipitation: wet ? tenth(0.1 + 2.4 * draw('amount')) : 0,
		precipitation_probability: chance,
		temperature_2m: tenth(temperature(middleMs, place, date, cloud)),
		wind_speed_10m: tenth(wind),
		wind_gusts_10m: tenth(wind * kind.gustFactor)
	};
}

/** Warm by latitude and season, cold before dawn, warmest two hours past noon. */
function temperature(ms: number, place: Place, date: string, cloud: number): number {
	const { latitude, longitude } = place;
	const dayOfYear = (ms / 86_400_000) % 365.2425;
	const season = Math.cos(((dayOfYear - 200) / 365.2425) * 2 * Math.PI) * Math.sign(latitude || 1);
	const mean = 27 - 0.35 * Math.abs(latitude) + 0.2 * Math.abs(latitude) * season;
	const solarHour = (ms / 3_600_000 + longitude / 15) % 24;
	const swing = (7 - 0.045 * cloud) * Math.cos(((solarHour - 14) / 24) * 2 * Math.PI);
	return mean + swing + 4 * (invented('warmth', latitude, longitude, date) - 0.5);
}

function tenth(value: number): number {
	return Math.round(value * 10) / 10;
}
