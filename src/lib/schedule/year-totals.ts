import type { LocalClock, LocalDate } from './local-clock';
import { openIntervals, type Interval } from './opening';
import { layOutSlots, type LaidSlot, type SlotPattern } from './slots';
import { wallParts } from './wall-parts';

/** What a span of the year gives. */
export interface Totals {
	/** Minutes in which the zone is open to the bow. */
	readonly bowMinutes: number;
	/** Those of them inside the opening hours and the season. */
	readonly openMinutes: number;
	/** Slots that fit. */
	readonly slots: number;
	/** Places in them. */
	readonly places: number;
}

/** The totals of a month, `YYYY-MM`. */
export interface MonthTotals extends Totals {
	readonly month: string;
}

/** The totals of a year by months, and the slots that were counted. */
export interface YearTotals {
	readonly months: readonly MonthTotals[];
	readonly year: Totals;
	readonly laidSlots: readonly LaidSlot[];
}

/** Dates, both counted, outside which nothing is sold. */
export interface Season {
	readonly from: LocalDate;
	readonly to: LocalDate;
}

const MS_PER_MINUTE = 60_000;

/** The twelve months of a year, `YYYY-MM`. */
export function monthsOf(year: number): string[] {
	return Array.from({ length: 12 }, (_, i) => `${year}-${String(i + 1).padStart(2, '0')}`);
}

/**
 * What the windows of a zone give in a calendar year.
 *
 * A minute counts to the month of the local date on which it passes, so a window over midnight may count
 * to two; a slot counts to the date on which it starts. Minutes are those that pass: the hour that the
 * clock skips is none, the hour that comes twice is two. As in publishing, only windows that start on a
 * date of the season have slots. Parts of windows outside the year are left out.
 *
 * @param windows of one zone, not overlapping, in any order
 * @param capacity places in a slot, a whole number of 0 or more
 * @param season null: the whole year
 * @throws RangeError when the pattern is wrong
 */
export function yearTotals({
	year,
	windows,
	clock,
	pattern,
	capacity,
	season
}: {
	year: number;
	windows: readonly (Interval & { readonly date: LocalDate })[];
	clock: LocalClock;
	pattern: SlotPattern;
	capacity: number;
	season: Season | null;
}): YearTotals {
	const sums = new Map(monthsOf(year).map((month) => [month, { bowMs: 0, openMs: 0, slots: 0 }]));
	const add = (interval: Interval, to: 'bowMs' | 'openMs') => {
		for (const { date, startMs, endMs } of wallParts(clock, interval)) {
			const sum = sums.get(date.slice(0, 7));
			if (sum) sum[to] += endMs - startMs;
		}
	};
	const sold = windows.filter(({ date }) => !season || (date >= season.from && date <= season.to));
	for (const window of windows) add(window, 'bowMs');
	for (const { startMs, endMs } of sold) {
		for (const open of openIntervals({ clock, hours: pattern.hours, startMs, endMs })) {
			add(open, 'openMs');
		}
	}
	const laidSlots = layOutSlots({ windows: sold, pattern, clock }).filter(({ date }) => {
		const sum = sums.get(date.slice(0, 7));
		if (sum) sum.slots++;
		return sum !== undefined;
	});
	const totals = (sum: { bowMs: number; openMs: number; slots: number }): Totals => ({
		bowMinutes: sum.bowMs / MS_PER_MINUTE,
		openMinutes: sum.openMs / MS_PER_MINUTE,
		slots: sum.slots,
		places: sum.slots * capacity
	});
	const all = { bowMs: 0, openMs: 0, slots: 0 };
	for (const sum of sums.values()) {
		all.bowMs += sum.bowMs;
		all.openMs += sum.openMs;
		all.slots += sum.slots;
	}
	return {
		months: [...sums].map(([month, sum]) => ({ month, ...totals(sum) })),
		year: totals(all),
		laidSlots
	};
}

/** How much more (or, below 0, less) one set of totals has than another. */
export function totalsDifference(totals: Totals, base: Totals): Totals {
	return {
		bowMinutes: totals.bowMinutes - base.bowMinutes,
		openMinutes: totals.openMinutes - base.openMinutes,
		slots: totals.slots - base.slots,
		places: totals.places - base.places
	};
}
