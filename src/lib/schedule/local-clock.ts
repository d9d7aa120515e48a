import { Temporal } from 'temporal-polyfill';

/** A span of time in which a zone's clock keeps one distance from UTC. */
interface ClockSpan {
	readonly startMs: number;
	readonly endMs: number;
	readonly offsetMs: number;
}

/** A local calendar date, `YYYY-MM-DD`. */
export type LocalDate = string;

/** What a clock on the wall of a site shows. */
export interface LocalClock {
	/** IANA name. */
	readonly timeZone: string;
	/** The local date at an instant (milliseconds since 1970 UTC). */
	dateAt(instantMs: number): LocalDate;
	/** Distance of the local clock from UTC at an instant, milliseconds, positive east. */
	offsetMsAt(instantMs: number): number;
	/** When the offset that holds at an instant ends, milliseconds; Infinity when it stays. */
	offsetEndsAtMs(instantMs: number): number;
}

/** Zones found good: a plan is checked many times while it is being drawn. */
const knownZones = new Set<string>();

/** Whether a text is the name of an IANA time zone. Bare offsets such as `+02:00` are not names. */
export function isTimeZone(name: string): boolean {
	if (knownZones.has(name)) return true;
	if (!/^[A-Za-z]/.test(name)) return false;
	try {
		Temporal.Instant.fromEpochMilliseconds(0).toZonedDateTimeISO(name);
		knownZones.add(name);
		return true;
	} catch {
		return false;
	}
}

function dateText(localMs: number): LocalDate {
	return new Date(localMs).toISOString().slice(0, -14);
}

/**
 * The local clock of an IANA time zone. Transitions are looked up once and kept, so that asking for
 * many instants costs an addition each.
 * @throws RangeError when the zone is unknown
 */
export function localClock(timeZone: string): LocalClock {
	if (!isTimeZone(timeZone)) throw new RangeError(`timeZone is unknown: ${timeZone}`);
	let last: ClockSpan = { startMs: 0, endMs: 0, offsetMs: 0 };
	const spanAt = (instantMs: number): ClockSpan => {
		if (instantMs >= last.startMs && instantMs < last.endMs) return last;
		const here = Temporal.Instant.fromEpochMilliseconds(Math.floor(instantMs)).toZonedDateTimeISO(
			timeZone
		);
		const next = here.getTimeZoneTransition('next');
		last = {
			startMs: Math.floor(instantMs),
			endMs: next ? next.epochMilliseconds : Infinity,
			offsetMs: here.offsetNanoseconds / 1e6
		};
		return last;
	};
	return {
		timeZone,
		dateAt: (instantMs) => dateText(instantMs + spanAt(instantMs).offsetMs),
		offsetMsAt: (instantMs) => spanAt(instantMs).offsetMs,
		offsetEndsAtMs: (instantMs) => spanAt(instantMs).endMs
	};
}
