import type { DayBandData } from '../day-band';
import type { PlanCaution } from '../plan-cautions';
import type { BesideAnswer, BesideQuestion } from './beside';
import { openBesideWorker } from './open-worker';

/** The day's band and the cautions of the plan under the hand, from a worker; the latest question counts. */
export class Beside {
	band: DayBandData | null = $state.raw(null);
	cautions: readonly PlanCaution[] = $state.raw([]);

	#worker: Worker | null = null;
	#busy = false;
	/** What to ask next, the newest of its kind. */
	readonly #waiting: Partial<Record<BesideQuestion['kind'], BesideQuestion>> = {};

	ask(question: BesideQuestion): void {
		this.#waiting[question.kind] = question;
		this.#next();
	}

	/** There is nothing to know of such a plan. */
	forget(): void {
		delete this.#waiting.band;
		delete this.#waiting.cautions;
		this.band = null;
		this.cautions = [];
	}

	close(): void {
		this.#worker?.terminate();
		this.#worker = null;
	}

	#next(): void {
		// The band follows the hand; the cautions can wait.
		const question = this.#waiting.band ?? this.#waiting.cautions;
		if (this.#busy || !question) return;
		delete this.#waiting[question.kind];
		this.#busy = true;
		this.#worker ??= this.#open();
		this.#worker.postMessage(question);
	}

	#open(): Worker {
		const worker = openBesideWorker();
		worker.onmessage = ({ data }: MessageEvent<BesideAnswer>) => {
			if (data.kind === 'band') this.band = data.band;
			else this.cautions = data.cautions;
			this.#busy = false;
			this.#next();
		};
		// A fault of ours: it is in the browser's log, and the next question is asked all the same.
		worker.onerror = () => {
			this.#busy = false;
			this.#next();
		};
		return worker;
	}
}
