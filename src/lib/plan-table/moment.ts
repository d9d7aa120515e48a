import { localDayRange, type LocalClock, type LocalDate } from '../schedule';

/** One local day of a site: it may have 23 or 25 hours. */
export interface TableDay {
	date: LocalDate;
	startMs: number;
	endMs: number;
}

export function tableDay(timeZone: string, date: LocalDate): TableDay {
	const { startMs, endMs } = localDayRange({ timeZone, from: date, to: date });
	return { date, startMs, endMs };
}

/**
 * The instant at which the wall clock of a day shows a time. Of two (the clock is put back) the first;
 * of none (it is put forward) the instant when it would have come.
 * @param time `HH:MM`
 * @returns null when the text is no time
 */
export function instantOfTime(clock: LocalClock, day: TableDay, time: string): number | null {
	const read = /^([01]?\d|2[0-3])[:.]([0-5]\d)$/.exec(time.trim());
	if (!read) return null;
	const wallMs =
		Date.parse(`${day.date}T00:00:00Z`) + (Number(read[1]) * 60 + Number(read[2])) * 60_000;
	// The offset is that of the instant sought: both that the day knows are tried, the earlier first.
	const offsets = [clock.offsetMsAt(day.startMs), clock.offsetMsAt(day.endMs - 1)];
	const found = offsets
		.map((offset) => wallMs - offset)
		.find((instant) => instant + clock.offsetMsAt(instant) === wallMs);
	return found ?? wallMs - offsets[0]!;
}

/** Days in the year of a date, and the place of the date among them from 1. */
export function dayOfYear(date: LocalDate): { day: number; days: number } {
	const year = date.slice(0, 4);
	const startMs = Date.parse(`${year}-01-01T00:00:00Z`);
	const days = (Date.parse(`${year}-12-31T00:00:00Z`) - startMs) / 86_400_000 + 1;
	return { day: (Date.parse(`${date}T00:00:00Z`) - startMs) / 86_400_000 + 1, days };
}

/** The date of a year's day, counted from 1. */
export function dateOfDay(year: string, day: number): LocalDate {
	return new Date(Date.parse(`${year}-01-01T00:00:00Z`) + (day - 1) * 86_400_000)
		.toISOString()
		.slice(0, 10);
}
