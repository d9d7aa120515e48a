import { z } from 'zod';
import { env } from '../env';

/** Hourly variables, in the names of the forecast service's public API. */
const variables = {
	directNormalIrradianceWm2: 'direct_normal_irradiance',
	cloudCoverPercent: 'cloud_cover',
	precipitationMm: 'precipitation',
	precipitationProbabilityPercent: 'precipitation_probability',
	temperatureC: 'temperature_2m',
	windSpeedMs: 'wind_speed_10m',
	windGustsMs: 'wind_gusts_10m'
} as const;

type Field = keyof typeof variables;

/** The weather of one hour. Sums and means are of the hour that ends at `until`. */
export type ForecastHour = { until: Date } & Record<Field, number>;

const values = z.array(z.number().nullable());
const answer = z.object({
	hourly: z.object({
		time: z.array(z.number()),
		direct_normal_irradiance: values,
		cloud_cover: values,
		precipitation: values,
		precipitation_probability: values,
		temperature_2m: values,
		wind_speed_10m: values,
		wind_gusts_10m: values
	})
});

/** The service gave no usable forecast. */
export class ForecastAway extends Error {
	override readonly name = 'ForecastAway';
}

/** Furthest that the service looks ahead, days. */
export const forecastDays = 7;

/**
 * The coming week at a place, hour by hour. The one module that knows the forecast service; a double
 * is reached by the environment alone. Hours of which the service does not know everything are left out.
 * @throws ForecastAway
 */
export async function readHours(place: {
	latitudeDeg: number;
	longitudeDeg: number;
	elevationM: number;
}): Promise<ForecastHour[]> {
	const url = new URL('/v1/forecast', env().FORECAST_API_URL);
	url.search = new URLSearchParams({
		latitude: place.latitudeDeg.toFixed(4),
		longitude: place.longitudeDeg.toFixed(4),
		elevation: String(Math.round(place.elevationM)),
		hourly: Object.values(variables).join(','),
		wind_speed_unit: 'ms',
		timeformat: 'unixtime',
		timezone: 'UTC',
		forecast_days: String(forecastDays)
	}).toString();
	let body: unknown;
	try {
		const response = await fetch(url, { signal: AbortSignal.timeout(15_000) });
		if (!response.ok) throw new ForecastAway(`the forecast service answered ${response.status}`);
		body = await response.json();
	} catch (error) {
		if (error instanceof ForecastAway) throw error;
		throw new ForecastAway('the forecast service could not be reached', { cause: error });
	}
	const read = answer.safeParse(body);
	if (!read.success) throw new ForecastAway('the forecast service answered something else');
	const { hourly } = read.data;
	return hourly.time.flatMap((seconds, i) => {
		const hour: Partial<ForecastHour> = { until: new Date(seconds * 1000) };
		for (const [field, name] of Object.entries(variables) as [Field, keyof typeof hourly][]) {
			const value = hourly[name][i];
			if (typeof value !== 'number') return [];
			hour[field] = value;
		}
		return [hour as ForecastHour];
	});
}
