/** Local days and clocks. Pure; instants are milliseconds since 1970 UTC. */
export { isTimeZone, localClock, type LocalClock, type LocalDate } from './local-clock';
export { addDays, localDayRange, MOST_DAYS, parseLocalDate } from './local-days';
export { parseInstant } from './instants';
