/**
 * Local days, opening hours, and slots laid in windows. Pure: instants are milliseconds since 1970 UTC,
 * wall-clock times are read through a zone's clock, and now is never asked for.
 */
export { isTimeZone, localClock, type LocalClock, type LocalDate } from './local-clock';
export { addDays, isLocalDate, localDayRange, MOST_DAYS, parseLocalDate } from './local-days';
export { coverOf, type Cover } from './cover';
export { parseInstant } from './instants';
export {
	openIntervals,
	parseTimeOfDay,
	uniteIntervals,
	type Interval,
	type OpeningHours,
	type OpeningSpan
} from './opening';
export { layOutSlots, uncoveredBow, type LaidSlot, type SlotPattern } from './slots';
export { clockChanges, wallParts, type ClockChange, type WallPart } from './wall-parts';
export {
	monthsOf,
	totalsDifference,
	yearTotals,
	type MonthTotals,
	type Season,
	type Totals,
	type YearTotals
} from './year-totals';
