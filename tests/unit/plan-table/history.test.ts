import { expect, test } from 'vitest';
import { record, redo, startHistory, undo } from '../../../src/lib/plan-table/history';

test('a thousand acts are undone and done again, one by one', () => {
	let history = startHistory(0);
	for (let i = 1; i <= 1000; i++) history = record(history, i);
	for (let i = 999; i >= 0; i--) {
		history = undo(history);
		expect(history.present).toBe(i);
	}
	expect(undo(history)).toBe(history);
	for (let i = 1; i <= 1000; i++) history = redo(history);
	expect(history.present).toBe(1000);
	expect(redo(history)).toBe(history);
});

test('a new act forgets what was undone', () => {
	const history = record(undo(record(startHistory('a'), 'b')), 'c');
	expect(history.present).toBe('c');
	expect(redo(history).present).toBe('c');
	expect(undo(history).present).toBe('a');
});

test('acts under one key are undone as one, until another comes between', () => {
	let history = record(startHistory(0), 1, 'field');
	history = record(history, 2, 'field');
	history = record(history, 3, 'other');
	history = record(history, 4, 'field');
	expect(undo(history).present).toBe(3);
	expect(undo(undo(history)).present).toBe(2);
	expect(undo(undo(undo(history))).present).toBe(0);
});

test('after an undo the same key begins anew', () => {
	let history = record(startHistory(0), 1, 'field');
	history = record(undo(history), 2, 'field');
	expect(undo(history).present).toBe(0);
});
