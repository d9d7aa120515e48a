import { placementField } from '../field';
import type { PlaceQuestion } from '../question';
import { FIELD_SIZE, searchPlaces } from '../search';
import type { SearchProgress, SearchResult, Suggestion } from '../suggestion';
import { WorkerPool } from './worker-pool';

/** A search for a place going on in workers, as a page shows it. */
export class PlaceRun {
	state: 'idle' | 'running' | 'done' | 'stopped' | 'failed' = $state('idle');
	progress: SearchProgress | null = $state.raw(null);
	result: SearchResult | null = $state.raw(null);
	/** What the results are of; the fields may have been changed since. */
	question: PlaceQuestion | null = $state.raw(null);
	fault = $state('');

	/** The best so far, or those that were found. */
	readonly suggestions: readonly Suggestion[] = $derived(
		this.result?.suggestions ?? this.progress?.best ?? []
	);

	readonly #pool = new WorkerPool();
	#stop: AbortController | null = null;

	/** Opens the workers ahead of the first search. */
	warm(): void {
		this.#pool.warm();
	}

	/**
	 * Searches anew; what was going on is left.
	 * @returns false when the curtain fits nowhere into the area
	 */
	start(question: PlaceQuestion): boolean {
		const field = placementField(question.area, question.curtain.lengthM, FIELD_SIZE);
		if (field.length === 0) return false;
		this.#leave();
		this.question = question;
		this.progress = null;
		this.result = null;
		this.fault = '';
		this.state = 'running';
		const stop = new AbortController();
		this.#stop = stop;
		const startMs = performance.now();
		searchPlaces({
			question,
			field,
			workers: this.#pool.put(question),
			signal: stop.signal,
			onprogress: (progress) => {
				if (stop !== this.#stop) return;
				if (!this.progress) this.#note('first', startMs);
				if (progress.stage !== 'field' && this.progress?.stage === 'field') {
					this.#note('field', startMs);
				}
				this.progress = progress;
			}
		}).then(
			(result) => {
				if (stop !== this.#stop) return;
				this.result = result;
				this.state = result.stopped ? 'stopped' : 'done';
				if (!result.stopped) this.#note('all', startMs);
			},
			(thrown: unknown) => {
				if (stop !== this.#stop) return;
				this.fault = thrown instanceof Error ? thrown.message : String(thrown);
				this.state = 'failed';
				this.#pool.end();
			}
		);
		return true;
	}

	/** Stops at once; the best so far stays. */
	stop(): void {
		if (this.state !== 'running') return;
		this.#stop?.abort();
		// A worker in the middle of a job would go on with it.
		this.#pool.end();
		this.#pool.warm();
	}

	/** Ends the workers. */
	close(): void {
		this.#leave();
		this.#pool.end();
	}

	#leave(): void {
		const busy = this.state === 'running';
		const before = this.#stop;
		this.#stop = null;
		before?.abort();
		if (busy) this.#pool.end();
		if (busy) this.state = 'stopped';
	}

	/** Leaves a measure for the browser's performance tools. */
	#note(what: 'first' | 'field' | 'all', startMs: number): void {
		performance.measure(`place search: ${what}`, { start: startMs });
	}
}
