import { Temporal } from 'temporal-polyfill';
import type { LocalDate } from './local-clock';

/** Most days that one range may count, both ends included. */
export const MOST_DAYS = 1100;

/**
 * A calendar date, `YYYY-MM-DD` with a year from 1900 to 2149, the years that the sun's formulas are
 * made for.
 * @throws RangeError when it is not one, or no such day is in the calendar
 */
export function parseLocalDate(text: string): Temporal.PlainDate {
	if (!/^\d{4}-\d{2}-\d{2}$/.test(text)) {
		throw new RangeError(`must be a date YYYY-MM-DD, not ${JSON.stringify(text)}`);
	}
	let date: Temporal.PlainDate;
	try {
		date = Temporal.PlainDate.from(text, { overflow: 'reject' });
	} catch {
		throw new RangeError(`must be a day of the calendar, not ${text}`);
	}
	if (date.year < 1900 || date.year > 2149) {
		throw new RangeError(`must be from 1900-01-01 to 2149-12-31, not ${text}`);
	}
	return date;
}

/** Whether a text is a date that `parseLocalDate` reads. */
export function isLocalDate(text: string): boolean {
	try {
		parseLocalDate(text);
		return true;
	} catch {
		return false;
	}
}

/**
 * A range of local days as instants.
 *
 * The first local midnight is the first instant of the first date: a midnight that the clock skips
 * gives the instant after the skip, and a date that the calendar of the place skipped whole (the date
 * line moved) is empty. The end is the last instant at which the following date could begin: where the
 * clock is set back over midnight, the date's hour that comes twice is wholly inside.
 *
 * @param from first date, @param to last date, both counted; to not before from, at most 1100 days
 * @returns milliseconds since 1970; the end is not counted
 * @throws RangeError when a date is wrong, the order is, or there are too many days
 */
export function localDayRange({
	timeZone,
	from,
	to
}: {
	timeZone: string;
	from: LocalDate;
	to: LocalDate;
}): { startMs: number; endMs: number; days: number } {
	const first = parseLocalDate(from);
	const last = parseLocalDate(to);
	const days = first.until(last, { largestUnit: 'days' }).days + 1;
	if (days < 1) throw new RangeError(`to must not be before from: ${to} is before ${from}`);
	if (days > MOST_DAYS) {
		throw new RangeError(`from ${from} to ${to} is ${days} days, more than ${MOST_DAYS}`);
	}
	const next = last.add({ days: 1 });
	return {
		startMs: first.toZonedDateTime(timeZone).epochMilliseconds,
		endMs: Math.max(
			next.toZonedDateTime(timeZone).epochMilliseconds,
			next.toPlainDateTime().toZonedDateTime(timeZone, { disambiguation: 'later' })
				.epochMilliseconds
		),
		days
	};
}

/** The date so many days after another. */
export function addDays(date: LocalDate, days: number): LocalDate {
	return parseLocalDate(date).add({ days }).toString();
}
