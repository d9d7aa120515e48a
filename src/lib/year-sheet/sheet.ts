import { strawToAmber } from '../day-band';
import { daylight, type BowWindow } from '../optics';
import {
	addDays,
	clockChanges,
	localDayRange,
	openIntervals,
	uncoveredBow,
	uniteIntervals,
	wallParts,
	type ClockChange,
	type Interval,
	type LocalClock,
	type LocalDate,
	type OpeningHours,
	type Season
} from '../schedule';
import type { Shade } from './year-pieces';

/**
 * The drawing of a year sheet, without a way of drawing: dates go down, a row of height 1 each from 0;
 * the wall clock goes across, in minutes from 0 to 1440. Screen, SVG and PNG all paint these paths.
 */

/** What the windows are coloured by. */
export type ColourBy = 'share' | 'arc';

/** Windows of one colour. */
export interface ColouredPath {
	readonly colour: string;
	/** Inside the opening hours and the season; the others are painted fainter. */
	readonly open: boolean;
	readonly d: string;
}

/** A frame of opening hours. */
export interface Frame {
	readonly fromMinute: number;
	readonly toMinute: number;
	readonly firstRow: number;
	/** Row after the last. */
	readonly endRow: number;
}

/** What of the sheet the plan's windows do not change. */
export interface SheetGround {
	readonly year: number;
	readonly days: number;
	readonly months: readonly {
		readonly month: string;
		readonly row: number;
		readonly days: number;
	}[];
	readonly changes: readonly (ClockChange & { readonly row: number })[];
	readonly frames: readonly Frame[];
	/** Whole hours that the sheet shows. */
	readonly fromHour: number;
	readonly toHour: number;
}

/** Opacity of windows outside the opening hours. */
export const CLOSED_OPACITY = 0.5;

const MS_PER_DAY = 86_400_000;
const COLOUR_STEPS = 20;

/** First and last date of a year. */
export const yearRange = (year: number) => ({ from: `${year}-01-01`, to: `${year}-12-31` });

/** The row of a date; below 0 or past the last when it is of another year. */
export function rowOf(year: number, date: LocalDate): number {
	return Math.round((Date.parse(date) - Date.parse(`${year}-01-01`)) / MS_PER_DAY);
}

/** The date of a row. */
export const dateOfRow = (year: number, row: number): LocalDate => addDays(`${year}-01-01`, row);

/** The instants of a year at a place. */
export function yearInterval(year: number, timeZone: string): Interval {
	return localDayRange({ timeZone, ...yearRange(year) });
}

function framesOf(year: number, days: number, hours: OpeningHours, season: Season | null): Frame[] {
	const firstRow = season ? Math.max(0, rowOf(year, season.from)) : 0;
	const endRow = season ? Math.min(days, rowOf(year, season.to) + 1) : days;
	if (firstRow >= endRow) return [];
	// The frame holds all weekdays: what is closed on some of them is painted fainter inside it.
	const spans = hours.weekdays.flat();
	return uniteIntervals(
		spans.map(({ fromMinute, toMinute }) => ({ startMs: fromMinute, endMs: toMinute }))
	).map(({ startMs, endMs }) => ({ fromMinute: startMs, toMinute: endMs, firstRow, endRow }));
}

/** Whole hours that hold the daylight of the year and the opening hours. */
function hoursShown(
	place: { latitudeDeg: number; longitudeDeg: number; clock: LocalClock },
	year: number,
	frames: readonly Frame[]
): { fromHour: number; toHour: number } {
	let from = 1440;
	let to = 0;
	const reach = (fromMinute: number, toMinute: number) => {
		from = Math.min(from, fromMinute);
		to = Math.max(to, toMinute);
	};
	// Days enough to catch the solstices and both sides of the changes of the clock.
	for (let row = 0; row < 364; row += 7) {
		const date = dateOfRow(year, row);
		const day = localDayRange({ timeZone: place.clock.timeZone, from: date, to: date });
		for (const part of daylight({ ...place, ...day })) {
			for (const { fromMinute, toMinute } of wallParts(place.clock, part)) {
				reach(fromMinute, toMinute);
			}
		}
	}
	for (const { fromMinute, toMinute } of frames) reach(fromMinute, toMinute);
	if (from >= to) return { fromHour: 0, toHour: 24 };
	return {
		fromHour: Math.max(0, Math.floor(from / 60 - 0.25)),
		toHour: Math.min(24, Math.ceil(to / 60 + 0.25))
	};
}

/** The ground of a sheet: rows, months, clock changes and the frames of the opening hours. */
export function sheetGround({
	year,
	place,
	hours,
	season
}: {
	year: number;
	place: { latitudeDeg: number; longitudeDeg: number; clock: LocalClock };
	hours: OpeningHours;
	season: Season | null;
}): SheetGround {
	const { timeZone } = place.clock;
	const { days } = localDayRange({ timeZone, ...yearRange(year) });
	const starts = Array.from({ length: 13 }, (_, i) =>
		i === 12 ? days : rowOf(year, `${year}-${String(i + 1).padStart(2, '0')}-01`)
	);
	const frames = framesOf(year, days, hours, season);
	return {
		year,
		days,
		months: starts.slice(0, 12).map((row, i) => ({
			month: `${year}-${String(i + 1).padStart(2, '0')}`,
			row,
			days: starts[i + 1]! - row
		})),
		changes: clockChanges(place.clock, yearInterval(year, timeZone)).map((change) => ({
			...change,
			row: rowOf(year, change.date)
		})),
		frames,
		...hoursShown(place, year, frames)
	};
}

/** Numbers in paths, minutes: a thousandth is finer than any screen. */
const short = (value: number) => String(Math.round(value * 1000) / 1000);

function rowsPath(clock: LocalClock, year: number, days: number, interval: Interval): string {
	let d = '';
	for (const { date, fromMinute, toMinute } of wallParts(clock, interval)) {
		const row = rowOf(year, date);
		if (row < 0 || row >= days) continue;
		d += `M${short(fromMinute)} ${row}H${short(toMinute)}v1H${short(fromMinute)}z`;
	}
	return d;
}

/** The path of intervals of one look, such as daylight. */
export function intervalsPath(
	ground: Pick<SheetGround, 'year' | 'days'>,
	clock: LocalClock,
	intervals: readonly Interval[]
): string {
	return intervals.map((one) => rowsPath(clock, ground.year, ground.days, one)).join('');
}

/** A part of a window that is painted in one colour. */
interface Painted extends Interval {
	readonly colour: string;
}

/** The parts of a window by colour; parts of one colour that touch are one. */
function paintedParts(
	window: BowWindow,
	shades: readonly Shade[] | undefined,
	colourOf: (share: number, arcDeg: number) => string
): Painted[] {
	if (!shades) {
		return [{ ...window, colour: colourOf(window.peakShare, window.peakArcDeg) }];
	}
	const parts: { startMs: number; endMs: number; colour: string }[] = [];
	for (const { startMs, endMs, share, arcDeg } of shades) {
		const colour = colourOf(share, arcDeg);
		const last = parts.at(-1);
		if (last?.colour === colour) last.endMs = endMs;
		else parts.push({ startMs, endMs, colour });
	}
	return parts;
}

/** What intervals have in common with one. */
function within(intervals: readonly Interval[], { startMs, endMs }: Interval): Interval[] {
	return intervals
		.filter((one) => one.endMs > startMs && one.startMs < endMs)
		.map((one) => ({
			startMs: Math.max(startMs, one.startMs),
			endMs: Math.min(endMs, one.endMs)
		}));
}

/**
 * The windows as one path a colour.
 * @param shades of the first windows, by place; a window without is painted by its peak
 * @param minimumShare of the plan's rule: just that share is straw, all eyes amber
 */
export function windowPaths({
	ground,
	clock,
	windows,
	shades = [],
	hours,
	season,
	colourBy,
	minimumShare
}: {
	ground: Pick<SheetGround, 'year' | 'days'>;
	clock: LocalClock;
	windows: readonly BowWindow[];
	shades?: readonly (readonly Shade[])[];
	hours: OpeningHours;
	season: Season | null;
	colourBy: ColourBy;
	minimumShare: number;
}): ColouredPath[] {
	const found = new Map<string, { colour: string; open: boolean; d: string }>();
	const paint = (colour: string, open: boolean, intervals: readonly Interval[]) => {
		if (intervals.length === 0) return;
		const key = `${colour} ${open}`;
		const path = found.get(key) ?? { colour, open, d: '' };
		path.d += intervalsPath(ground, clock, intervals);
		found.set(key, path);
	};
	const colourOf = (share: number, arcDeg: number) =>
		strawToAmber(
			Math.round(colourPart(share, arcDeg, colourBy, minimumShare) * COLOUR_STEPS) / COLOUR_STEPS
		);
	for (const [i, window] of windows.entries()) {
		const inSeason = !season || (window.date >= season.from && window.date <= season.to);
		const { startMs, endMs } = window;
		const open = inSeason ? openIntervals({ clock, hours, startMs, endMs }) : [];
		const closed = uncoveredBow({ windows: [window], slots: open }).parts;
		for (const part of paintedParts(window, shades[i], colourOf)) {
			paint(part.colour, true, within(open, part));
			paint(part.colour, false, within(closed, part));
		}
	}
	return [...found.values()].filter(({ d }) => d !== '');
}

/** Where a colour lies between straw (0) and amber (1). */
function colourPart(
	share: number,
	arcDeg: number,
	colourBy: ColourBy,
	minimumShare: number
): number {
	if (colourBy === 'arc') return (arcDeg - 40) / 140;
	return minimumShare >= 1 ? 1 : (share - minimumShare) / (1 - minimumShare);
}
