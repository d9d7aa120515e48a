import { Temporal } from 'temporal-polyfill';

/**
 * An instant written as RFC 3339, with `Z` or an offset.
 * @returns milliseconds since 1970 UTC
 * @throws RangeError when it is not one, or its year is not from 1900 to 2149
 */
export function parseInstant(text: string): number {
	let instant: Temporal.Instant;
	try {
		instant = Temporal.Instant.from(text);
	} catch {
		throw new RangeError(
			`must be an instant such as 2027-03-01T08:30:00Z, not ${JSON.stringify(text)}`
		);
	}
	const year = new Date(instant.epochMilliseconds).getUTCFullYear();
	if (year < 1900 || year > 2149) {
		throw new RangeError(`must be of the years 1900 to 2149, not ${text}`);
	}
	return instant.epochMilliseconds;
}
