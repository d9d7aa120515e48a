import type { BowWindow } from '../optics';
import type { Interval } from '../schedule';
import type { Plan } from '../schemas/plan';
import type { YearAnswer, YearRequest } from './messages';
import { openYearWorker } from './open-worker';

/** What a run computes. */
export interface YearQuestion {
	readonly plan: Plan;
	readonly zoneIndex: number;
	readonly year: number;
}

/** A year being computed in a worker of its own, as a page shows it. */
export class YearRun {
	state: 'idle' | 'running' | 'done' | 'stopped' | 'failed' = $state('idle');
	daysDone = $state(0);
	daysInAll = $state(365);
	windows: readonly BowWindow[] = $state.raw([]);
	daylight: readonly Interval[] = $state.raw([]);
	fault = $state('');
	/** Milliseconds from when the worker had the plan to its first result, and to its last. */
	firstMs: number | null = $state(null);
	allMs: number | null = $state(null);

	#worker: Worker | null = null;
	#run = 0;

	/** Starts the worker ahead of the first question: fetching it is what a page waits for once. */
	warm(): void {
		this.#worker ??= this.#open();
	}

	/** Starts anew; what was running is left. */
	start({ plan, zoneIndex, year }: YearQuestion): void {
		this.warm();
		this.#run++;
		this.state = 'running';
		this.daysDone = 0;
		this.windows = [];
		this.daylight = [];
		this.fault = '';
		this.firstMs = null;
		this.allMs = null;
		this.#send({ kind: 'start', run: this.#run, plan, zoneIndex, year });
	}

	/** Leaves what is running; what is known stays. */
	stop(): void {
		if (this.state !== 'running') return;
		this.#send({ kind: 'stop' });
		this.#run++;
		this.state = 'stopped';
	}

	/** Ends the worker. */
	close(): void {
		this.#worker?.terminate();
		this.#worker = null;
		this.#run++;
		if (this.state === 'running') this.state = 'stopped';
	}

	#send(request: YearRequest): void {
		this.#worker?.postMessage(request);
	}

	#open(): Worker {
		const worker = openYearWorker();
		worker.onmessage = ({ data }: MessageEvent<YearAnswer>) => this.#take(data);
		worker.onerror = () => this.#fail('The part that computes could not be started.');
		return worker;
	}

	#take(answer: YearAnswer): void {
		// Late answers of a run that was left.
		if (answer.run !== this.#run) return;
		if (answer.kind === 'fault') {
			this.#fail(answer.message);
			return;
		}
		this.windows = [...this.windows, ...answer.windows];
		this.daylight = [...this.daylight, ...answer.daylight];
		this.daysDone = answer.daysDone;
		this.daysInAll = answer.daysInAll;
		this.firstMs ??= answer.afterMs;
		if (answer.daysDone >= answer.daysInAll) {
			this.allMs = answer.afterMs;
			this.state = 'done';
		}
	}

	#fail(message: string): void {
		this.fault = message;
		this.state = 'failed';
	}
}
