import { formatCount, formatDayShort, formatTime } from './format';
import { formatMoney } from './money';
import type { TargetSlot } from './slot-words';

/** A sold or held slot that does not lie wholly in a window of a plan version. */
export interface Conflict {
	slotId: string;
	zone: string;
	/** The version has no such zone. */
	zoneGone: boolean;
	localDate: string;
	startsAt: Date;
	endsAt: Date;
	sold: number;
	held: number;
	/** Paid orders, and orders that are being paid. */
	orders: number;
	pending: number;
	/** What was paid for it, minor units. */
	amountMinor: number;
	/** Minutes of it that lie in a window, of all of its minutes. */
	coveredMinutes: number;
	minutes: number;
	/** The window of its zone around that day that fits best; null when there is none. */
	nearest: { startsAt: Date; endsAt: Date } | null;
	/** The windows of its zone that reach into that day, for drawing. */
	dayWindows: { startsAt: Date; endsAt: Date; peakArcDeg: number }[];
	/** Coming slots that lie in a window of the version and have room for everybody. */
	targets: TargetSlot[];
	/** What the last move away from it could not take along. */
	failedMoveId: string | null;
}

/** What a person chose for a slot: `keep`, `call_off`, `move:` with the slot to go to, or `later`: not yet. */
export type Choice = string;

export interface Chosen {
	slotId: string;
	choice: Choice;
}

/** The slot that a choice moves to; null for the other choices. */
export const targetOf = (choice: Choice): string | null =>
	choice.startsWith('move:') ? choice.slice('move:'.length) : null;

/** Whether visitors feel it: it is told in numbers first, and wants a reason. */
export const isHarsh = (choice: Choice): boolean => choice !== 'keep' && choice !== 'later';

/** Names choices that visitors feel, so that what was told in numbers is what is done. */
export function seenOf(chosen: Chosen[]): string {
	return chosen
		.filter(({ choice }) => isHarsh(choice))
		.map(({ slotId, choice }) => `${slotId} ${choice}`)
		.sort()
		.join('\n');
}

export interface Deeds {
	kept: number;
	/** Left for another time. */
	later: number;
	moved: { slots: number; orders: number; places: number };
	calledOff: { slots: number; orders: number; places: number; amountMinor: number };
}

/** What choices come to, in numbers. */
export function deedsOf(conflicts: Conflict[], chosen: Chosen[]): Deeds {
	const choiceOf = new Map(chosen.map(({ slotId, choice }) => [slotId, choice]));
	const of = (test: (choice: Choice) => boolean) =>
		conflicts.filter(({ slotId }) => test(choiceOf.get(slotId) ?? 'later'));
	const sum = (rows: Conflict[], value: (row: Conflict) => number) =>
		rows.reduce((total, row) => total + value(row), 0);
	const moved = of((choice) => targetOf(choice) !== null);
	const off = of((choice) => choice === 'call_off');
	return {
		kept: of((choice) => choice === 'keep').length,
		later: of((choice) => choice === 'later').length,
		moved: {
			slots: moved.length,
			orders: sum(moved, ({ orders }) => orders),
			places: sum(moved, ({ sold }) => sold)
		},
		calledOff: {
			slots: off.length,
			orders: sum(off, ({ orders }) => orders),
			places: sum(off, ({ sold }) => sold),
			amountMinor: sum(off, ({ amountMinor }) => amountMinor)
		}
	};
}

/** The same in sentences; empty when nothing was to be decided. */
export function deedWords({ kept, later, moved, calledOff }: Deeds, currency: string): string[] {
	const words: string[] = [];
	if (kept > 0)
		words.push(`Keep ${formatCount(kept, 'slot')} as ${kept === 1 ? 'it is' : 'they are'}.`);
	if (moved.slots > 0) {
		words.push(
			`Move ${formatCount(moved.slots, 'slot')}: ${formatCount(moved.orders, 'order')}, ${formatCount(moved.places, 'place')}, write to ${formatCount(moved.orders, 'visitor')}. No money moves.`
		);
	}
	if (calledOff.slots > 0) {
		words.push(
			calledOff.orders === 0
				? `Call off ${formatCount(calledOff.slots, 'slot')}: nobody has paid, nothing goes back.`
				: `Call off ${formatCount(calledOff.slots, 'slot')}: ${callOffWords(calledOff, currency)}.`
		);
	}
	if (later > 0) {
		words.push(
			`Leave ${formatCount(later, 'slot')} to be decided: ${later === 1 ? 'it stays as it is, and listed.' : 'they stay as they are, and listed.'}`
		);
	}
	return words;
}

/** refund 4 orders, 128.00 EUR, write to 4 visitors */
export function callOffWords(
	{ orders, amountMinor }: { orders: number; amountMinor: number },
	currency: string
): string {
	return `refund ${formatCount(orders, 'order')}, ${formatMoney(amountMinor, currency)}, write to ${formatCount(orders, 'visitor')}`;
}

/** How much of a slot has the bow, and when it would have all of it, in words. */
export function coverWords(conflict: Conflict, timeZone: string): string {
	if (conflict.zoneGone) return `There is no zone ${conflict.zone} any more.`;
	const { coveredMinutes, minutes, nearest } = conflict;
	const covered =
		coveredMinutes <= 0
			? 'The bow is not in view then'
			: `The bow is in view for ${minutesWords(coveredMinutes)} of its ${minutesWords(minutes)}`;
	if (!nearest) return `${covered}; no window that day.`;
	const span = `${formatTime(nearest.startsAt, timeZone)} to ${formatTime(nearest.endsAt, timeZone)}`;
	return `${covered}; nearest window ${span}.`;
}

/** Never rounded up to the whole: a slot that lacks seconds is told as lacking. */
function minutesWords(minutes: number): string {
	const tenths = Math.floor(minutes * 10 + 1e-6) / 10;
	return `${Number.isInteger(tenths) ? tenths : tenths.toFixed(1)} min`;
}

/** A slot in a few words: Tue 1 Dec, 09:20–09:40, Terrace. */
export function slotWords(
	{
		localDate,
		startsAt,
		endsAt,
		zone
	}: Pick<Conflict, 'localDate' | 'startsAt' | 'endsAt' | 'zone'>,
	timeZone: string
): string {
	return `${formatDayShort(localDate)}, ${formatTime(startsAt, timeZone)}–${formatTime(endsAt, timeZone)}, ${zone}`;
}
