import { hoursOf, type ForecastQuery, type WindUnit } from './query.ts';
import type { Scripts } from './scripts.ts';
import { invented, weatherOfHour, type Hour, type Place } from './sky.ts';

/** The service answers for the nearest point of its grid, in degrees. */
const GRID_DEG = 0.02;

const WIND: Record<WindUnit, { unit: string; factor: number }> = {
	kmh: { unit: 'km/h', factor: 1 },
	ms: { unit: 'm/s', factor: 1 / 3.6 },
	mph: { unit: 'mp/h', factor: 1 / 1.609344 },
	kn: { unit: 'kn', factor: 1 / 1.852 }
};

interface Shown {
	unit: string;
	digits: number;
	convert: (value: number) => number;
}

/** The point of the service's grid that a place belongs to. */
export function gridPoint({ latitude, longitude }: Place): Place {
	const snap = (value: number) => Number((Math.round(value / GRID_DEG) * GRID_DEG).toFixed(2));
	return { latitude: snap(latitude), longitude: snap(longitude) };
}

/** The body of a successful answer. */
export function answer(query: ForecastQuery, scripts: Scripts): Record<string, unknown> {
	const began = performance.now();
	const place = gridPoint(query);
	const hours = hoursOf(query);
	const weather = hours.map((at) => weatherOfHour(at, place, scripts));
	const shown = Object.fromEntries(
		query.variables.map((name) => [name, howShown(name, query)] as const)
	);
	const columns = Object.entries(shown).map(([name, how]) => [
		name,
		weather.map((hour) => Number(how.convert(hour[name as keyof Hour]).toFixed(how.digits)))
	]);
	const offset = query.utcOffsetSeconds;
	const body = {
		...place,
		utc_offset_seconds: offset,
		timezone: query.timeZone,
		timezone_abbreviation: abbreviation(offset),
		elevation:
			query.elevation ?? Math.round(600 * invented('height', place.latitude, place.longitude)),
		...(columns.length === 0
			? {}
			: {
					hourly_units: {
						time: query.unixTime ? 'unixtime' : 'iso8601',
						...Object.fromEntries(Object.entries(shown).map(([name, how]) => [name, how.unit]))
					},
					hourly: {
						time: hours.map((at) =>
							query.unixTime
								? at / 1000
								: new Date(at + offset * 1000).toISOString().slice(0, 'YYYY-MM-DDTHH:MM'.length)
						),
						...Object.fromEntries(columns)
					}
				})
	};
	return { ...body, generationtime_ms: performance.now() - began };
}

function howShown(name: keyof Hour, query: ForecastQuery): Shown {
	const same = (value: number) => value;
	switch (name) {
		case 'direct_normal_irradiance':
			return { unit: 'W/m²', digits: 1, convert: same };
		case 'cloud_cover':
		case 'precipitation_probability':
			return { unit: '%', digits: 0, convert: same };
		case 'precipitation':
			return query.inches
				? { unit: 'inch', digits: 3, convert: (mm) => mm / 25.4 }
				: { unit: 'mm', digits: 2, convert: same };
		case 'temperature_2m':
			return query.fahrenheit
				? { unit: '°F', digits: 1, convert: (celsius) => celsius * 1.8 + 32 }
				: { unit: '°C', digits: 1, convert: same };
		case 'wind_speed_10m':
		case 'wind_gusts_10m': {
			const { unit, factor } = WIND[query.wind];
			return { unit, digits: query.wind === 'ms' ? 2 : 1, convert: (kmh) => kmh * factor };
		}
	}
}

/** As the service writes it: GMT, GMT+1, GMT+5:30. */
function abbreviation(offsetSeconds: number): string {
	if (offsetSeconds === 0) return 'GMT';
	const sign = offsetSeconds < 0 ? '-' : '+';
	const minutes = Math.abs(Math.round(offsetSeconds / 60));
	const rest = minutes % 60 === 0 ? '' : `:${String(minutes % 60).padStart(2, '0')}`;
	return `GMT${sign}${Math.floor(minutes / 60)}${rest}`;
}
