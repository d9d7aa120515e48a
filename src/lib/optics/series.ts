import { localDayRange, addDays } from '../schedule/local-days';
import type { LocalDate } from '../schedule/local-clock';
import { stateAt, sunIsUp } from './instant';
import type { Site } from './site';
import { findWindows, type ZoneWindows } from './windows';

/** A zone's share at an instant of a day. */
export interface ShareMoment {
	readonly instantMs: number;
	readonly azimuthDeg: number;
	readonly altitudeDeg: number;
	/** Whether the sun is high enough for the rule and above the skyline. */
	readonly sunUp: boolean;
	/** One share a zone, in the plan's order, 0 to 1: geometry alone. */
	readonly shares: readonly number[];
}

/**
 * The share of every zone over one local day, from its first instant to the next day's, both counted.
 * @param stepMinutes minutes between moments, 1 to 120; 5 when absent
 * @throws RangeError when the date or the step is wrong
 */
export function shareOverDay({
	site,
	date,
	stepMinutes = 5
}: {
	site: Site;
	date: LocalDate;
	stepMinutes?: number;
}): ShareMoment[] {
	if (!(stepMinutes >= 1 && stepMinutes <= 120)) {
		throw new RangeError('stepMinutes must be from 1 to 120');
	}
	const { startMs, endMs } = localDayRange({ timeZone: site.clock.timeZone, from: date, to: date });
	const moments: ShareMoment[] = [];
	for (let instantMs = startMs; instantMs <= endMs; instantMs += stepMinutes * 60_000) {
		const { sun, zones } = stateAt(site, instantMs);
		moments.push({
			instantMs,
			...sun,
			sunUp: sunIsUp(site, sun),
			shares: zones.map(({ share }) => share)
		});
	}
	return moments;
}

/** A piece of a long range, as soon as it is known. */
export interface WindowsPiece {
	/** First and last local date of the piece. */
	readonly from: LocalDate;
	readonly to: LocalDate;
	readonly zones: readonly ZoneWindows[];
	readonly daysDone: number;
	readonly daysInAll: number;
}

/** Gives the thread back to whoever waits for it: a page that is being dragged, other requests. */
const breathe = () => new Promise<void>((resolve) => setTimeout(resolve, 0));

/**
 * The windows of a range in pieces, in order, so that a page can show what is known and stay alive. The
 * pieces together are what `findWindows` gives for the whole range.
 *
 * @param from first local date, @param to last, both counted, at most 1100 days
 * @param daysPerPiece 1 or more; 7 when absent
 * @param signal stops the work between two pieces when aborted
 * @throws RangeError when the dates are wrong; the signal's reason when it is aborted
 */
export async function* windowsInPieces({
	site,
	from,
	to,
	daysPerPiece = 7,
	signal
}: {
	site: Site;
	from: LocalDate;
	to: LocalDate;
	daysPerPiece?: number;
	signal?: AbortSignal;
}): AsyncGenerator<WindowsPiece> {
	const { days } = localDayRange({ timeZone: site.clock.timeZone, from, to });
	if (!(Number.isInteger(daysPerPiece) && daysPerPiece >= 1)) {
		throw new RangeError('daysPerPiece must be a whole number of 1 or more');
	}
	for (let done = 0; done < days; done += daysPerPiece) {
		signal?.throwIfAborted();
		const pieceDays = Math.min(daysPerPiece, days - done);
		const pieceFrom = addDays(from, done);
		const pieceTo = addDays(from, done + pieceDays - 1);
		yield {
			from: pieceFrom,
			to: pieceTo,
			zones: findWindows({ site, from: pieceFrom, to: pieceTo }),
			daysDone: done + pieceDays,
			daysInAll: days
		};
		await breathe();
	}
}
