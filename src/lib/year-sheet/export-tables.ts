import type { BowWindow } from '../optics';
import type { LocalClock } from '../schedule';

/** What an export is of. */
export interface ExportOf {
	readonly site: string;
	readonly zone: string;
	readonly year: number;
	/** Such as `version 3` or `what-if`. */
	readonly plan: string;
}

/** The name of a file: site, zone, year and plan in plain letters, such as `quarry-terrace_2027.csv`. */
export function fileName({ site, zone, year, plan }: ExportOf, extension: string): string {
	const plain = (text: string) =>
		text
			.normalize('NFD')
			.replaceAll(/\p{Mn}/gu, '')
			.toLowerCase()
			.replaceAll(/[^\p{L}\p{N}]+/gu, '-')
			.replaceAll(/^-|-$/g, '')
			.slice(0, 60);
	const parts = [plain(site) || 'site', plain(zone) || 'zone', String(year), plain(plan)];
	return `${parts.filter(Boolean).join('_')}.${extension}`;
}

/** An instant on the wall clock with its distance from UTC, RFC 3339: `2027-03-01T09:12:05+01:00`. */
export function localInstant(clock: LocalClock, instantMs: number): string {
	const offsetMinutes = clock.offsetMsAt(instantMs) / 60_000;
	const wall = new Date(instantMs + offsetMinutes * 60_000).toISOString().slice(0, 19);
	const size = Math.abs(Math.round(offsetMinutes));
	const two = (value: number) => String(value).padStart(2, '0');
	return `${wall}${offsetMinutes < 0 ? '-' : '+'}${two(Math.floor(size / 60))}:${two(size % 60)}`;
}

const utcInstant = (instantMs: number) => `${new Date(instantMs).toISOString().slice(0, 19)}Z`;

/** Heads of the table of windows. */
export const windowColumns = [
	'date',
	'start_local',
	'end_local',
	'start_utc',
	'end_utc',
	'minutes',
	'peak_share',
	'peak_arc_deg'
] as const;

/**
 * The windows as CSV (RFC 4180: commas, CRLF), a line each, numbers unrounded: what the engine found is
 * what the file says.
 */
export function windowsCsv(windows: readonly BowWindow[], clock: LocalClock): string {
	const lines = windows.map(({ date, startMs, endMs, peakShare, peakArcDeg }) => [
		date,
		localInstant(clock, startMs),
		localInstant(clock, endMs),
		utcInstant(startMs),
		utcInstant(endMs),
		String((endMs - startMs) / 60_000),
		String(peakShare),
		String(peakArcDeg)
	]);
	return [windowColumns, ...lines].map((cells) => `${cells.join(',')}\r\n`).join('');
}
