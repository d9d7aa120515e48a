/** The formatters of dates, times and numbers: one each, English with the day before the month. */

/** An instant with its zone said: 1 Dec 2026, 09:20 UTC. */
export function formatInstant(at: Date, timeZone: string): string {
	return new Intl.DateTimeFormat('en-GB', {
		day: 'numeric',
		month: 'short',
		year: 'numeric',
		hour: '2-digit',
		minute: '2-digit',
		timeZone,
		timeZoneName: 'short'
	}).format(at);
}

/** Time of day on the wall clock of a zone: 09:20. */
export function formatTime(at: Date, timeZone: string): string {
	return new Intl.DateTimeFormat('en-GB', {
		hour: '2-digit',
		minute: '2-digit',
		timeZone
	}).format(at);
}

/** A local date `YYYY-MM-DD`: 1 Dec 2026. */
export function formatDate(date: string): string {
	return localDate(date, { day: 'numeric', month: 'short', year: 'numeric' });
}

/** A local date with its weekday: Tuesday 1 December. */
export function formatDay(date: string): string {
	return localDate(date, { weekday: 'long', day: 'numeric', month: 'long' });
}

/** A local date with its weekday, short: Tue 1 Dec. */
export function formatDayShort(date: string): string {
	return localDate(date, { weekday: 'short', day: 'numeric', month: 'short' });
}

/** A month `YYYY-MM`: December. */
export function formatMonth(month: string): string {
	return localDate(`${month}-01`, { month: 'long' });
}

/** A month `YYYY-MM`, short: Dec. */
export function formatMonthShort(month: string): string {
	return localDate(`${month}-01`, { month: 'short' });
}

function localDate(date: string, options: Intl.DateTimeFormatOptions): string {
	// A calendar date has no zone: it is set and read in UTC.
	const format = new Intl.DateTimeFormat('en-GB', { ...options, timeZone: 'UTC' });
	return format.format(new Date(`${date}T00:00:00Z`));
}

/** The short name of a zone at an instant: CET, GMT+9. */
export function zoneName(at: Date, timeZone: string): string {
	const parts = new Intl.DateTimeFormat('en-GB', { timeZone, timeZoneName: 'short' });
	return parts.formatToParts(at).find(({ type }) => type === 'timeZoneName')?.value ?? timeZone;
}

/** A rate as it stands on documents: `10.00` is 10 %, `5.50` is 5.5 %. */
export function formatPercent(percent: string | number): string {
	return `${Number(percent)} %`;
}

/** A share from 0 to 1 as a whole percentage. */
export function formatShare(share: number): string {
	return `${Math.round(share * 100)} %`;
}

/** Minutes as people say them: 45 min, 1 h 5 min. */
export function formatMinutes(minutes: number): string {
	const whole = Math.round(minutes);
	const hours = Math.floor(whole / 60);
	if (hours === 0) return `${whole} min`;
	return whole % 60 === 0 ? `${hours} h` : `${hours} h ${whole % 60} min`;
}

/** A count with its noun: 1 place, 3 places. */
export function formatCount(count: number, one: string, many = `${one}s`): string {
	return `${count.toLocaleString('en-GB')} ${count === 1 ? one : many}`;
}

/** A number with the thousands parted: 4,210; with digits after the point where asked. */
export function formatNumber(value: number, digits = 0): string {
	return value.toLocaleString('en-GB', {
		minimumFractionDigits: digits,
		maximumFractionDigits: digits
	});
}

/** A whole number with its sign: +12, −3, 0. */
export function formatSigned(value: number): string {
	const whole = Math.round(value);
	if (whole === 0) return '0';
	return `${whole > 0 ? '+' : '−'}${formatNumber(Math.abs(whole))}`;
}
