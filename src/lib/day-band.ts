import { daylight } from './optics';
import { localDayRange } from './schedule';

/** What a day band shows: instants in milliseconds since 1970 UTC. */
export interface DayBandData {
	date: string;
	timeZone: string;
	startMs: number;
	endMs: number;
	daylight: { startMs: number; endMs: number }[];
	windows: { startMs: number; endMs: number; arcDeg: number }[];
	slots: { startMs: number; endMs: number; state: 'free' | 'sold' | 'off' }[];
}

interface BandSlot {
	startsAt: Date;
	endsAt: Date;
	status: string;
	capacity: number;
	held: number;
	sold: number;
}

/** The band of one local day of a site. */
export function dayBand({
	site,
	date,
	windows,
	slots
}: {
	site: { latitudeDeg: number; longitudeDeg: number; timeZone: string };
	date: string;
	windows: { startsAt: Date; endsAt: Date; peakArcDeg: number }[];
	slots: BandSlot[];
}): DayBandData {
	const { startMs, endMs } = localDayRange({ timeZone: site.timeZone, from: date, to: date });
	const inside = (row: { startsAt: Date; endsAt: Date }) =>
		row.endsAt.getTime() > startMs && row.startsAt.getTime() < endMs;
	return {
		date,
		timeZone: site.timeZone,
		startMs,
		endMs,
		daylight: daylight({ ...site, startMs, endMs }),
		windows: windows.filter(inside).map((row) => ({
			startMs: Math.max(startMs, row.startsAt.getTime()),
			endMs: Math.min(endMs, row.endsAt.getTime()),
			arcDeg: row.peakArcDeg
		})),
		slots: slots.filter(inside).map((row) => ({
			startMs: row.startsAt.getTime(),
			endMs: row.endsAt.getTime(),
			state:
				row.status === 'called_off'
					? ('off' as const)
					: row.held + row.sold >= row.capacity
						? ('sold' as const)
						: ('free' as const)
		}))
	};
}

/** From straw #F4E7BF (0) to amber #D88A06 (1), for bands too small to read a spectrum in: `#rrggbb`. */
export function strawToAmber(part: number): string {
	const held = Math.min(1, Math.max(0, part));
	const mix = (from: number, to: number) =>
		Math.round(from + (to - from) * held)
			.toString(16)
			.padStart(2, '0');
	return `#${mix(0xf4, 0xd8)}${mix(0xe7, 0x8a)}${mix(0xbf, 0x06)}`;
}

/** Straw to amber by arc: 40 degrees and 180. */
export function arcColour(arcDeg: number): string {
	return strawToAmber((arcDeg - 40) / 140);
}
