import { describe, expect, test } from 'vitest';
import type { ForecastHour } from '$lib/server/weather/forecast';
import { suggest } from '$lib/server/weather/suggest';

const hour = (change: Partial<ForecastHour> = {}): ForecastHour => ({
	until: new Date('2027-03-01T09:00:00Z'),
	directNormalIrradianceWm2: 600,
	cloudCoverPercent: 5,
	precipitationMm: 0,
	precipitationProbabilityPercent: 0,
	temperatureC: 12,
	windSpeedMs: 3,
	windGustsMs: 5,
	...change
});
const site = { gustLimitMs: 12 };
const word = (...hours: ForecastHour[]) => suggest(hours, site)?.suggestion;

describe('what the forecast suggests', () => {
	test('a clear sky goes', () => expect(word(hour())).toBe('go'));
	// Sunshine counts from 120 W/m2 of direct normal irradiance: WMO-No. 8.
	test('sunshine begins at 120 W/m2', () => {
		expect(word(hour({ directNormalIrradianceWm2: 120 }))).toBe('go');
		expect(word(hour({ directNormalIrradianceWm2: 119 }))).toBe('wait');
		expect(word(hour({ directNormalIrradianceWm2: 10 }))).toBe('call_off');
	});
	test('the strongest gust of the hours counts, at the site’s own limit', () => {
		expect(word(hour(), hour({ windGustsMs: 12 }))).toBe('call_off');
		expect(suggest([hour({ windGustsMs: 12 })], { gustLimitMs: 14 })?.suggestion).toBe('go');
	});
	test('heavy rain calls off, frost waits', () => {
		expect(word(hour({ precipitationMm: 2 }))).toBe('call_off');
		expect(word(hour({ temperatureC: 1 }))).toBe('wait');
	});
	test('no forecast, no suggestion', () => expect(word()).toBeUndefined());
});
