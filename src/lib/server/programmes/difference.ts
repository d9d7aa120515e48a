import {
	layOutSlots,
	localClock,
	parseTimeOfDay,
	uncoveredBow,
	type Interval
} from '../../schedule';
import type { programme, slot } from '../db/schema';
import type { StoredWindow } from '../sites/compute';

type Programme = typeof programme.$inferSelect;
type Slot = typeof slot.$inferSelect;

/** A slot that publishing would add. */
export interface NewSlot {
	window: StoredWindow;
	localDate: string;
	startsAt: Date;
	endsAt: Date;
}

/** A sold or held slot that the programme no longer has: a person decides what becomes of it. */
export interface StayingSlot {
	slot: Slot;
	/** No window of the live plan covers it (promise 11). */
	outsideWindows: boolean;
}

/** What publishing would do. Sold slots are never among what it touches. */
export interface Difference {
	added: NewSlot[];
	/** As they are, or with another capacity; the window is the live plan's. */
	kept: { slot: Slot; window: StoredWindow; capacity: number }[];
	removed: Slot[];
	staying: StayingSlot[];
	/** Times that the pattern gives but where another slot of the zone stands. */
	blocked: NewSlot[];
	/** Minutes of coming bow inside the season that no slot covers, and in all. */
	uncoveredMinutes: number;
	bowMinutes: number;
}

const ms = ({ startsAt, endsAt }: { startsAt: Date; endsAt: Date }): Interval => ({
	startMs: startsAt.getTime(),
	endMs: endsAt.getTime()
});

const overlaps = (a: Interval, b: Interval) => a.startMs < b.endMs && b.startMs < a.endMs;

/**
 * Compares what a programme would lay out in its windows with the slots that there are.
 * @param slots coming slots of the zone, of any programme; those called off block their time and no more
 */
export function findDifference({
	programme,
	timeZone,
	windows,
	slots,
	now
}: {
	programme: Programme;
	timeZone: string;
	windows: StoredWindow[];
	slots: Slot[];
	now: Date;
}): Difference {
	const intervals = windows.map(ms);
	const laid = layOutSlots({
		windows: intervals,
		clock: localClock(timeZone),
		pattern: {
			lengthMinutes: programme.slotMinutes,
			gapMinutes: programme.gapMinutes,
			gridMinutes: programme.gridMinutes,
			hours: {
				weekdays: programme.openingHours.map((spans) =>
					spans.map(({ from, to }) => ({
						fromMinute: parseTimeOfDay(from),
						toMinute: parseTimeOfDay(to)
					}))
				),
				daysOff: programme.daysOff
			}
		}
	}).filter(({ startMs }) => startMs > now.getTime());
	const windowOf = (at: Interval) =>
		windows.find((_, i) => intervals[i]!.startMs <= at.startMs && at.endMs <= intervals[i]!.endMs);

	const standingOff = slots.filter(({ status }) => status === 'called_off');
	const present = slots.filter(({ status }) => status !== 'called_off');
	const own = present.filter(({ programmeId }) => programmeId === programme.id);
	const wanted = new Map(laid.map((one) => [`${one.startMs} ${one.endMs}`, one]));
	const kept: Difference['kept'] = [];
	const removed: Slot[] = [];
	const staying: StayingSlot[] = [];
	for (const slot of own) {
		const at = ms(slot);
		const key = `${at.startMs} ${at.endMs}`;
		const window = windowOf(at);
		const taken = slot.sold + slot.held;
		if (wanted.has(key) && window) {
			wanted.delete(key);
			kept.push({ slot, window, capacity: Math.max(programme.capacity, taken) });
		} else if (taken === 0) removed.push(slot);
		else staying.push({ slot, outsideWindows: window === undefined });
	}
	const standing = [
		...staying.map(({ slot }) => ms(slot)),
		...present.filter(({ programmeId }) => programmeId !== programme.id).map(ms)
	];
	const barred = [...standing, ...standingOff.map(ms)];
	const added: NewSlot[] = [];
	const blocked: NewSlot[] = [];
	for (const one of wanted.values()) {
		const window = windowOf(one);
		if (!window) continue;
		const fresh = {
			window,
			localDate: one.date,
			startsAt: new Date(one.startMs),
			endsAt: new Date(one.endMs)
		};
		(barred.some((other) => overlaps(other, one)) ? blocked : added).push(fresh);
	}
	const coming = intervals.flatMap(({ startMs, endMs }) =>
		endMs > now.getTime() ? [{ startMs: Math.max(startMs, now.getTime()), endMs }] : []
	);
	const covering = [...kept.map(({ slot }) => ms(slot)), ...added.map(ms), ...standing];
	const { minutes } = uncoveredBow({ windows: coming, slots: covering });
	return {
		added,
		kept,
		removed,
		staying,
		blocked,
		uncoveredMinutes: minutes,
		bowMinutes: coming.reduce((sum, at) => sum + at.endMs - at.startMs, 0) / 60_000
	};
}
