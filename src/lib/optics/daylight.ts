import { sunPosition } from './sun';

/** Altitude of the sun's centre at sunrise and sunset, degrees, on its apparent path (upper edge at 0). */
const EDGE_DEG = -0.27;
const STEP_MS = 300_000;

/**
 * The parts of a range in which the sun's upper edge is above a flat horizon, ends to about a second.
 * @param startMs, @param endMs milliseconds since 1970 UTC
 * @returns intervals in order of time; none in polar night
 */
export function daylight({
	latitudeDeg,
	longitudeDeg,
	startMs,
	endMs
}: {
	latitudeDeg: number;
	longitudeDeg: number;
	startMs: number;
	endMs: number;
}): { startMs: number; endMs: number }[] {
	const up = (instantMs: number) =>
		sunPosition({ instantMs, latitudeDeg, longitudeDeg }).altitudeDeg > EDGE_DEG;
	const edge = (beforeMs: number, afterMs: number): number => {
		const wasUp = up(beforeMs);
		let low = beforeMs;
		let high = afterMs;
		while (high - low > 1000) {
			const middle = (low + high) / 2;
			if (up(middle) === wasUp) low = middle;
			else high = middle;
		}
		return Math.round(high);
	};
	const found: { startMs: number; endMs: number }[] = [];
	let from = up(startMs) ? startMs : null;
	for (let at = startMs; at < endMs; at += STEP_MS) {
		const next = Math.min(at + STEP_MS, endMs);
		if (up(at) === up(next)) continue;
		const turn = edge(at, next);
		if (from === null) from = turn;
		else {
			found.push({ startMs: from, endMs: turn });
			from = null;
		}
	}
	if (from !== null) found.push({ startMs: from, endMs });
	return found;
}
