/** What was, is and was undone. Values are never changed in place, so keeping them all costs little. */
export interface History<T> {
	readonly past: readonly T[];
	readonly present: T;
	readonly future: readonly T[];
	/** Acts under the same key one after the other are undone as one, such as typing in a field. */
	readonly key: string | null;
}

export const startHistory = <T>(present: T): History<T> => ({
	past: [],
	present,
	future: [],
	key: null
});

/** The history after an act. What was undone is gone. */
export function record<T>(history: History<T>, next: T, key: string | null = null): History<T> {
	if (next === history.present) return history;
	const joined = key !== null && key === history.key;
	return {
		past: joined ? history.past : [...history.past, history.present],
		present: next,
		future: [],
		key
	};
}

export function undo<T>(history: History<T>): History<T> {
	const before = history.past.at(-1);
	if (before === undefined) return history;
	return {
		past: history.past.slice(0, -1),
		present: before,
		future: [history.present, ...history.future],
		key: null
	};
}

export function redo<T>(history: History<T>): History<T> {
	const [after, ...rest] = history.future;
	if (after === undefined) return history;
	return { past: [...history.past, history.present], present: after, future: rest, key: null };
}
