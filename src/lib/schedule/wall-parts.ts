import type { LocalClock, LocalDate } from './local-clock';
import type { Interval } from './opening';

/** A part of an interval as the wall clock shows it: on one date, without a change of the clock. */
export interface WallPart extends Interval {
	readonly date: LocalDate;
	/** Minutes past midnight that the clock shows, 0 to 1440, fractions kept. */
	readonly fromMinute: number;
	readonly toMinute: number;
}

const MS_PER_MINUTE = 60_000;
const MS_PER_DAY = 86_400_000;

/**
 * An interval cut at the midnights and the changes of a wall clock. The parts together last exactly as
 * long as the interval: an hour that comes twice gives two parts at the same minutes of the clock, an
 * hour that is skipped gives none.
 * @returns parts in order of time
 */
export function wallParts(clock: LocalClock, { startMs, endMs }: Interval): WallPart[] {
	const parts: WallPart[] = [];
	for (let partStart = startMs; partStart < endMs;) {
		const offsetMs = clock.offsetMsAt(partStart);
		const midnight = Math.floor((partStart + offsetMs) / MS_PER_DAY) * MS_PER_DAY;
		const partEnd = Math.min(
			endMs,
			clock.offsetEndsAtMs(partStart),
			midnight + MS_PER_DAY - offsetMs
		);
		parts.push({
			date: clock.dateAt(partStart),
			startMs: partStart,
			endMs: partEnd,
			fromMinute: (partStart + offsetMs - midnight) / MS_PER_MINUTE,
			toMinute: (partEnd + offsetMs - midnight) / MS_PER_MINUTE
		});
		partStart = partEnd;
	}
	return parts;
}

/** A change of a clock. */
export interface ClockChange {
	readonly atMs: number;
	/** Local date on which the new time first holds. */
	readonly date: LocalDate;
	/** Minutes that the clock is put forward; below 0 when it is put back. */
	readonly forwardMinutes: number;
}

/** The changes of a clock after startMs and before endMs, in order. */
export function clockChanges(clock: LocalClock, { startMs, endMs }: Interval): ClockChange[] {
	const changes: ClockChange[] = [];
	let offsetMs = clock.offsetMsAt(startMs);
	for (let atMs = clock.offsetEndsAtMs(startMs); atMs < endMs; atMs = clock.offsetEndsAtMs(atMs)) {
		const nextMs = clock.offsetMsAt(atMs);
		changes.push({
			atMs,
			date: clock.dateAt(atMs),
			forwardMinutes: (nextMs - offsetMs) / MS_PER_MINUTE
		});
		offsetMs = nextMs;
	}
	return changes;
}
