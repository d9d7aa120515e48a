import type { LocalClock, LocalDate } from './local-clock';

/** An interval of instants, milliseconds since 1970 UTC, start below end. */
export interface Interval {
	readonly startMs: number;
	readonly endMs: number;
}

/** A part of a local day, minutes past midnight on the wall clock, 0 to 1440, from below to. */
export interface OpeningSpan {
	readonly fromMinute: number;
	readonly toMinute: number;
}

/** When an operator is open, by the wall clock of the site. */
export interface OpeningHours {
	/**
	 * Spans of each weekday, Monday first, seven lists. Hours over midnight are two spans: to 1440 on one
	 * day and from 0 on the next.
	 */
	readonly weekdays: readonly (readonly OpeningSpan[])[];
	/** Dates, `YYYY-MM-DD`, on which nothing opens. */
	readonly daysOff: readonly LocalDate[];
}

const MS_PER_MINUTE = 60_000;
const MS_PER_DAY = 86_400_000;
const MINUTES_PER_DAY = 1440;

/**
 * Minutes past midnight of a wall-clock time `HH:MM`, 00:00 to 24:00.
 * @throws RangeError when it is not one
 */
export function parseTimeOfDay(text: string): number {
	const match = /^(\d{2}):(\d{2})$/.exec(text);
	const minutes = match ? Number(match[1]) * 60 + Number(match[2]) : NaN;
	if (!match || Number(match[2]) > 59 || minutes > MINUTES_PER_DAY) {
		throw new RangeError(`must be a time HH:MM from 00:00 to 24:00, not ${JSON.stringify(text)}`);
	}
	return minutes;
}

/** @throws RangeError when the hours are not seven lists of spans within a day */
export function checkOpeningHours({ weekdays, daysOff }: OpeningHours): void {
	if (weekdays.length !== 7) throw new RangeError('weekdays must be seven lists, Monday first');
	weekdays.forEach((spans, day) =>
		spans.forEach(({ fromMinute, toMinute }, i) => {
			if (!(fromMinute >= 0 && fromMinute < toMinute && toMinute <= MINUTES_PER_DAY)) {
				throw new RangeError(
					`weekdays[${day}][${i}] must run from 0 to 1440 minutes, from below to`
				);
			}
		})
	);
	daysOff.forEach((date, i) => {
		if (!/^\d{4}-\d{2}-\d{2}$/.test(date)) throw new RangeError(`daysOff[${i}] must be a date`);
	});
}

/**
 * The instants within [startMs, endMs] at which the wall clock shows an opening time, as intervals that
 * do not touch.
 *
 * Literal about the clock: on a day of 23 hours the hour that the clock skips is no time at all, and on
 * a day of 25 hours a wall-clock time that comes twice is open both times.
 *
 * @throws RangeError when the hours are wrong
 */
export function openIntervals({
	clock,
	hours,
	startMs,
	endMs
}: {
	clock: LocalClock;
	hours: OpeningHours;
	startMs: number;
	endMs: number;
}): Interval[] {
	checkOpeningHours(hours);
	const daysOff = new Set(hours.daysOff);
	const found: Interval[] = [];
	for (let spanStart = startMs; spanStart < endMs;) {
		// Within such a span wall-clock time is UTC plus one number.
		const spanEnd = Math.min(endMs, clock.offsetEndsAtMs(spanStart));
		const offsetMs = clock.offsetMsAt(spanStart);
		const firstDay = Math.floor((spanStart + offsetMs) / MS_PER_DAY);
		const lastDay = Math.floor((spanEnd + offsetMs) / MS_PER_DAY);
		for (let day = firstDay; day <= lastDay; day++) {
			const midnight = new Date(day * MS_PER_DAY);
			if (daysOff.has(midnight.toISOString().slice(0, 10))) continue;
			for (const { fromMinute, toMinute } of hours.weekdays[(midnight.getUTCDay() + 6) % 7]!) {
				const base = day * MS_PER_DAY - offsetMs;
				const from = Math.max(spanStart, base + fromMinute * MS_PER_MINUTE);
				const to = Math.min(spanEnd, base + toMinute * MS_PER_MINUTE);
				if (from < to) found.push({ startMs: from, endMs: to });
			}
		}
		spanStart = spanEnd;
	}
	return uniteIntervals(found);
}

/** The same instants as intervals in order that neither overlap nor touch. */
export function uniteIntervals(intervals: readonly Interval[]): Interval[] {
	const united: { startMs: number; endMs: number }[] = [];
	for (const { startMs, endMs } of [...intervals].sort((a, b) => a.startMs - b.startMs)) {
		const last = united.at(-1);
		if (last && startMs <= last.endMs) last.endMs = Math.max(last.endMs, endMs);
		else united.push({ startMs, endMs });
	}
	return united;
}
