import type { Interval } from './opening';

/** How a slot lies to windows. */
export interface Cover {
	/** All of it lies in one window, its ends counted. */
	readonly inside: boolean;
	/** Milliseconds of it that some window covers. */
	readonly coveredMs: number;
	/** The window that covers most of it, else the one least far away; null when there is none. */
	readonly nearest: Interval | null;
}

/**
 * How a slot lies to the windows of its zone: a slot that begins with a window or ends with it is inside.
 * @param windows apart from each other, in any order
 */
export function coverOf(slot: Interval, windows: readonly Interval[]): Cover {
	let inside = false;
	let coveredMs = 0;
	let nearest: Interval | null = null;
	let best = -Infinity;
	for (const window of windows) {
		// Positive: the length shared; negative: the gap between them.
		const shared = Math.min(slot.endMs, window.endMs) - Math.max(slot.startMs, window.startMs);
		coveredMs += Math.max(0, shared);
		inside ||= window.startMs <= slot.startMs && slot.endMs <= window.endMs;
		if (shared > best) {
			best = shared;
			nearest = window;
		}
	}
	return { inside, coveredMs, nearest };
}
