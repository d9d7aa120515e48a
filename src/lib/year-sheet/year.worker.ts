import type { YearAnswer, YearRequest } from './messages';
import type { BowWindow } from '../optics';
import { shadesOf, siteOfZone, yearPieces } from './year-pieces';

/** Computes years beside the page: one run at a time, a new one ends the one before. */

/** Windows shaded before a new question is listened for. */
const WINDOWS_AT_A_TIME = 60;

let current: AbortController | null = null;

const answer = (told: YearAnswer) => self.postMessage(told);

async function compute(request: YearRequest & { kind: 'start' }, signal: AbortSignal) {
	const startedMs = performance.now();
	const { run, plan, zoneIndex, year } = request;
	try {
		const site = siteOfZone(plan, zoneIndex);
		const windows: BowWindow[] = [];
		for await (const piece of yearPieces({ site, year, signal })) {
			if (signal.aborted) return;
			windows.push(...piece.windows);
			answer({ kind: 'piece', run, ...piece, afterMs: performance.now() - startedMs });
		}
		for (let i = 0; i < windows.length; i += WINDOWS_AT_A_TIME) {
			const some = windows.slice(i, i + WINDOWS_AT_A_TIME);
			answer({ kind: 'shades', run, shades: some.map((window) => shadesOf(site, window)) });
			// A new question gets in between.
			await new Promise((resolve) => setTimeout(resolve, 0));
			if (signal.aborted) return;
		}
	} catch (thrown) {
		if (signal.aborted) return;
		const message = thrown instanceof Error ? thrown.message : String(thrown);
		answer({ kind: 'fault', run, message });
	}
}

self.onmessage = ({ data }: MessageEvent<YearRequest>) => {
	current?.abort();
	current = null;
	if (data.kind === 'stop') return;
	current = new AbortController();
	void compute(data, current.signal);
};
