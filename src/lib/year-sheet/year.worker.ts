import type { YearAnswer, YearRequest } from './messages';
import { yearPieces } from './year-pieces';

/** Computes years beside the page: one run at a time, a new one ends the one before. */

let current: AbortController | null = null;

const answer = (told: YearAnswer) => self.postMessage(told);

async function compute(request: YearRequest & { kind: 'start' }, signal: AbortSignal) {
	const startedMs = performance.now();
	const { run, plan, zoneIndex, year } = request;
	try {
		for await (const piece of yearPieces({ plan, zoneIndex, year, signal })) {
			if (signal.aborted) return;
			answer({ kind: 'piece', run, ...piece, afterMs: performance.now() - startedMs });
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
