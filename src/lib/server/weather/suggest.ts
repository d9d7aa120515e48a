import type { ForecastHour } from './forecast';

/** Sunshine counts from this direct normal irradiance, W/m2 (WMO-No. 8). */
export const sunshineWm2 = 120;

/** Spray freezes on paths and masts from about here, degrees C (common practice). */
const iceC = 2;

/** Rain that keeps people away, mm an hour (common practice). */
const heavyRainMm = 2;

export interface Suggestion {
	suggestion: 'go' | 'wait' | 'call_off';
	/** What it rests on, in words. */
	because: string;
	weather: Omit<ForecastHour, 'until'>;
}

/**
 * What the forecast suggests for a slot. A suggestion only: a person decides.
 * @param hours those that the slot touches
 * @returns null when the forecast does not reach that far
 */
export function suggest(
	hours: ForecastHour[],
	{ gustLimitMs }: { gustLimitMs: number }
): Suggestion | null {
	if (hours.length === 0) return null;
	const most = (field: Exclude<keyof ForecastHour, 'until'>) =>
		Math.max(...hours.map((hour) => hour[field]));
	const mean = (field: Exclude<keyof ForecastHour, 'until'>) =>
		hours.reduce((sum, hour) => sum + hour[field], 0) / hours.length;
	const weather = {
		directNormalIrradianceWm2: mean('directNormalIrradianceWm2'),
		cloudCoverPercent: mean('cloudCoverPercent'),
		precipitationMm: most('precipitationMm'),
		precipitationProbabilityPercent: most('precipitationProbabilityPercent'),
		temperatureC: Math.min(...hours.map((hour) => hour.temperatureC)),
		windSpeedMs: most('windSpeedMs'),
		windGustsMs: most('windGustsMs')
	};
	const sun = `sun ${Math.round(weather.directNormalIrradianceWm2)} W/m², cloud ${Math.round(weather.cloudCoverPercent)} %`;
	if (weather.windGustsMs >= gustLimitMs) {
		return {
			suggestion: 'call_off',
			because: `gusts of ${Math.round(weather.windGustsMs)} m/s, above the site’s limit of ${gustLimitMs} m/s`,
			weather
		};
	}
	if (weather.precipitationMm >= heavyRainMm) {
		return {
			suggestion: 'call_off',
			because: `rain of ${weather.precipitationMm.toFixed(1)} mm an hour`,
			weather
		};
	}
	if (weather.temperatureC <= iceC) {
		return {
			suggestion: 'wait',
			because: `${Math.round(weather.temperatureC)} °C: spray can freeze; ${sun}`,
			weather
		};
	}
	if (weather.directNormalIrradianceWm2 >= sunshineWm2) {
		return { suggestion: 'go', because: sun, weather };
	}
	// Half of what counts as sunshine, averaged over the slot, still means gaps in the cloud.
	const broken = weather.directNormalIrradianceWm2 >= sunshineWm2 / 2;
	return { suggestion: broken ? 'wait' : 'call_off', because: `${sun}: too little sun`, weather };
}
