import { expect, test } from 'vitest';
import { coverOf } from '../../../src/lib/schedule/index.ts';
import { createRandom, casesFor, seedFor } from '../../support/random.ts';

const at = (startMs: number, endMs: number) => ({ startMs, endMs });

test('a slot that fills its window, or touches an end of it, is inside', () => {
	for (const slot of [at(100, 200), at(100, 150), at(150, 200), at(120, 180)]) {
		expect(coverOf(slot, [at(100, 200)])).toEqual({
			inside: true,
			coveredMs: slot.endMs - slot.startMs,
			nearest: at(100, 200)
		});
	}
});

test('one millisecond beyond an end is outside', () => {
	expect(coverOf(at(99, 150), [at(100, 200)])).toMatchObject({ inside: false, coveredMs: 50 });
	expect(coverOf(at(150, 201), [at(100, 200)])).toMatchObject({ inside: false, coveredMs: 50 });
});

test('two windows that each hold a part do not make one that holds it all', () => {
	const windows = [at(0, 100), at(100, 200)];
	expect(coverOf(at(50, 150), windows)).toMatchObject({ inside: false, coveredMs: 100 });
});

test('the nearest is the one that covers most, else the least far away', () => {
	const windows = [at(0, 100), at(300, 400), at(1000, 2000)];
	expect(coverOf(at(90, 320), windows).nearest).toEqual(at(300, 400));
	expect(coverOf(at(110, 150), windows).nearest).toEqual(at(0, 100));
	expect(coverOf(at(450, 600), windows).nearest).toEqual(at(300, 400));
	expect(coverOf(at(100, 200), [])).toEqual({ inside: false, coveredMs: 0, nearest: null });
});

test('counted second by second it is the same', () => {
	const random = createRandom(seedFor('cover', 4711));
	const whole = (most: number) => Math.floor(random() * most);
	for (let i = 0; i < casesFor(400); i++) {
		const windows = [];
		for (let from = whole(20); from < 100;) {
			const to = from + 1 + whole(20);
			windows.push(at(from, to));
			from = to + 1 + whole(10);
		}
		const start = whole(100);
		const slot = at(start, start + 1 + whole(15));
		let covered = 0;
		for (let ms = slot.startMs; ms < slot.endMs; ms++) {
			if (windows.some(({ startMs, endMs }) => startMs <= ms && ms + 1 <= endMs)) covered++;
		}
		const found = coverOf(slot, windows);
		expect(found.coveredMs).toBe(covered);
		// Windows stand apart here: only one can cover all of it.
		expect(found.inside).toBe(covered === slot.endMs - slot.startMs);
	}
});
