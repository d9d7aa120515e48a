import type { LocalClock, LocalDate } from './local-clock';
import { openIntervals, uniteIntervals, type Interval, type OpeningHours } from './opening';

/** How slots are laid into windows. */
export interface SlotPattern {
	/** Minutes that a slot lasts, above 0. */
	readonly lengthMinutes: number;
	/** Least minutes from the end of one slot to the start of the next, 0 or more. */
	readonly gapMinutes: number;
	/** Slots start on multiples of so many minutes past the local hour, 1 to 60. */
	readonly gridMinutes: number;
	readonly hours: OpeningHours;
}

/** A slot before it is stored. */
export interface LaidSlot extends Interval {
	/** Local date on which it starts. */
	readonly date: LocalDate;
}

const MS_PER_MINUTE = 60_000;
const MS_PER_HOUR = 3_600_000;

/**
 * The first instant at or after one at which the wall clock stands on the grid: a whole minute that is
 * a multiple of `gridMinutes` past the local hour.
 */
function nextOnGrid(clock: LocalClock, instantMs: number, gridMinutes: number): number {
	const gridMs = gridMinutes * MS_PER_MINUTE;
	for (let from = instantMs; ;) {
		const offsetMs = clock.offsetMsAt(from);
		const hour = Math.floor((from + offsetMs) / MS_PER_HOUR) * MS_PER_HOUR;
		const pastHour = Math.ceil((from + offsetMs - hour) / gridMs) * gridMs;
		// A grid that does not divide the hour starts afresh at the next hour.
		const next = hour + Math.min(pastHour, MS_PER_HOUR) - offsetMs;
		const offsetEnds = clock.offsetEndsAtMs(from);
		if (next < offsetEnds) return next;
		from = offsetEnds;
	}
}

function checkPattern({ lengthMinutes, gapMinutes, gridMinutes }: SlotPattern): void {
	const minutes = { lengthMinutes, gapMinutes, gridMinutes };
	for (const [name, value] of Object.entries(minutes)) {
		if (!Number.isFinite(value)) throw new RangeError(`${name} must be a finite number`);
	}
	if (!(lengthMinutes > 0 && lengthMinutes <= 1440)) {
		throw new RangeError('lengthMinutes must be above 0, to 1440');
	}
	if (!(gapMinutes >= 0 && gapMinutes <= 1440)) {
		throw new RangeError('gapMinutes must be from 0 to 1440');
	}
	if (!(Number.isInteger(gridMinutes) && gridMinutes >= 1 && gridMinutes <= 60)) {
		throw new RangeError('gridMinutes must be a whole number from 1 to 60');
	}
}

/**
 * Lays slots out inside windows, greedily: the first at the earliest grid time that fits, the next at
 * the earliest grid time at or after the last end plus the gap, over all windows in order of time. A slot
 * is placed only when all of it, both ends counted, lies inside one window and inside opening hours.
 *
 * The grid and the hours are read from the site's wall clock, the slots are instants: on days when the
 * clock changes they stay at the sun's right moment.
 *
 * @param windows of one zone; they may come in any order
 * @returns slots in order of time, never overlapping
 * @throws RangeError when the pattern is wrong
 */
export function layOutSlots({
	windows,
	pattern,
	clock
}: {
	windows: readonly Interval[];
	pattern: SlotPattern;
	clock: LocalClock;
}): LaidSlot[] {
	checkPattern(pattern);
	const lengthMs = pattern.lengthMinutes * MS_PER_MINUTE;
	const gapMs = pattern.gapMinutes * MS_PER_MINUTE;
	const slots: LaidSlot[] = [];
	let earliest = -Infinity;
	for (const window of [...windows].sort((a, b) => a.startMs - b.startMs)) {
		for (const open of openIntervals({ clock, hours: pattern.hours, ...window })) {
			for (;;) {
				const startMs = nextOnGrid(clock, Math.max(open.startMs, earliest), pattern.gridMinutes);
				const endMs = startMs + lengthMs;
				if (endMs > open.endMs) break;
				slots.push({ date: clock.dateAt(startMs), startMs, endMs });
				earliest = endMs + gapMs;
			}
		}
	}
	return slots;
}

/**
 * The bow that no slot covers: the parts of the windows outside all slots, in order of time.
 * @returns the parts, and their length together in minutes (not rounded)
 */
export function uncoveredBow({
	windows,
	slots
}: {
	windows: readonly Interval[];
	slots: readonly Interval[];
}): { parts: Interval[]; minutes: number } {
	const covered = uniteIntervals(slots);
	const parts: Interval[] = [];
	for (const window of uniteIntervals(windows)) {
		let from = window.startMs;
		for (const slot of covered) {
			if (slot.endMs <= from) continue;
			if (slot.startMs >= window.endMs) break;
			if (slot.startMs > from) parts.push({ startMs: from, endMs: slot.startMs });
			from = slot.endMs;
		}
		if (from < window.endMs) parts.push({ startMs: from, endMs: window.endMs });
	}
	const ms = parts.reduce((sum, { startMs, endMs }) => sum + endMs - startMs, 0);
	return { parts, minutes: ms / MS_PER_MINUTE };
}
