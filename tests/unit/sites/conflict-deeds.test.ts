import { expect, test } from 'vitest';
import {
	coverWords,
	deedWords,
	deedsOf,
	seenOf,
	targetOf,
	type Conflict
} from '../../../src/lib/conflict-deeds.ts';

const conflict = (slotId: string, more: Partial<Conflict> = {}): Conflict => ({
	slotId,
	zone: 'Terrace',
	zoneGone: false,
	localDate: '2027-05-01',
	startsAt: new Date('2027-05-01T06:00:00Z'),
	endsAt: new Date('2027-05-01T06:20:00Z'),
	sold: 3,
	held: 0,
	orders: 2,
	pending: 0,
	amountMinor: 4800,
	coveredMinutes: 5,
	minutes: 20,
	nearest: {
		startsAt: new Date('2027-05-01T06:15:00Z'),
		endsAt: new Date('2027-05-01T08:00:00Z')
	},
	dayWindows: [],
	targets: [],
	failedMoveId: null,
	...more
});

test('what is not chosen is left to be decided, and the sums are of the slots chosen alone', () => {
	const all = [
		conflict('a'),
		conflict('b'),
		conflict('c', { orders: 1, sold: 1 }),
		conflict('d'),
		conflict('e')
	];
	const deeds = deedsOf(all, [
		{ slotId: 'b', choice: 'call_off' },
		{ slotId: 'c', choice: 'move:x' },
		{ slotId: 'd', choice: 'call_off' },
		{ slotId: 'e', choice: 'keep' },
		{ slotId: 'unknown', choice: 'call_off' }
	]);
	expect(deeds).toEqual({
		kept: 1,
		later: 1,
		moved: { slots: 1, orders: 1, places: 1 },
		calledOff: { slots: 2, orders: 4, places: 6, amountMinor: 9600 }
	});
	expect(deedWords(deeds, 'EUR')).toEqual([
		'Keep 1 slot as it is.',
		'Move 1 slot: 1 order, 1 place, write to 1 visitor. No money moves.',
		'Call off 2 slots: refund 4 orders, 96.00 EUR, write to 4 visitors.',
		'Leave 1 slot to be decided: it stays as it is, and listed.'
	]);
	expect(deedWords(deedsOf([], []), 'EUR')).toEqual([]);
});

test('choices have one name whatever their order, and another for any other choice', () => {
	const [a, b] = [
		{ slotId: 'a', choice: 'call_off' },
		{ slotId: 'b', choice: 'move:x' }
	];
	expect(seenOf([a, b])).toBe(seenOf([b, a]));
	expect(seenOf([a, { slotId: 'k', choice: 'keep' }])).toBe(seenOf([a]));
	expect(seenOf([a, { ...b, choice: 'move:y' }])).not.toBe(seenOf([a, b]));
	expect(seenOf([{ slotId: 'k', choice: 'keep' }])).toBe('');
	expect(seenOf([{ slotId: 'k', choice: 'later' }])).toBe('');
	expect([targetOf('move:x'), targetOf('keep'), targetOf('call_off')]).toEqual(['x', null, null]);
});

test('minutes that lack seconds are never told as whole', () => {
	const words = (coveredMinutes: number) => coverWords(conflict('a', { coveredMinutes }), 'UTC');
	expect(words(20 - 1 / 60)).toContain('19.9 min of its 20 min');
	expect(words(5)).toContain('5 min of its 20 min; nearest window 06:15 to 08:00.');
	expect(words(0)).toContain('The bow is not in view then');
	expect(coverWords(conflict('a', { nearest: null, coveredMinutes: 0 }), 'UTC')).toBe(
		'The bow is not in view then; no window that day.'
	);
	expect(coverWords(conflict('a', { zoneGone: true }), 'UTC')).toContain('no zone Terrace');
});
