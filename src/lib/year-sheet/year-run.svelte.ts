import type { BowWindow } from '../optics';
import type { Interval } from '../schedule';
import type { Plan } from '../schemas/plan';
import type { YearAnswer, YearRequest } from './messages';
import { openYearWorker } from './open-worker';
import type { Shade } from './year-pieces';

/** Between showings of what is known, milliseconds. */
const SHOW_EVERY_MS = 80;

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
	/** Shades of the first windows, by their place; they come after the last day. */
	shades: readonly (readonly Shade[])[] = $state.raw([]);
	fault = $state('');

	#worker: Worker | null = null;
	#run = 0;
	#startedMs = 0;
	#waiting: (YearAnswer & { kind: 'piece' })[] = [];
	#timer: ReturnType<typeof setTimeout> | null = null;

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
		this.shades = [];
		this.fault = '';
		this.#startedMs = performance.now();
		this.#waiting = [];
		this.#forgetTimer();
		this.#send({ kind: 'start', run: this.#run, plan, zoneIndex, year });
	}

	/** Leaves what is running; what is known stays. */
	stop(): void {
		if (this.state !== 'running') return;
		this.#send({ kind: 'stop' });
		this.#show();
		this.#run++;
		this.state = 'stopped';
	}

	/** Ends the worker. */
	close(): void {
		this.#worker?.terminate();
		this.#worker = null;
		this.#forgetTimer();
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
		if (answer.kind === 'shades') {
			this.shades = [...this.shades, ...answer.shades];
			return;
		}
		this.#waiting.push(answer);
		// The first result is shown at once. Then some at a time: each showing draws and counts the year anew.
		if (this.daysDone === 0 || answer.daysDone >= answer.daysInAll) this.#show();
		else this.#timer ??= setTimeout(() => this.#show(), SHOW_EVERY_MS);
	}

	#show(): void {
		const answers = this.#waiting.splice(0);
		const last = answers.at(-1);
		this.#forgetTimer();
		if (!last) return;
		const first = this.daysDone === 0;
		this.windows = [...this.windows, ...answers.flatMap(({ windows }) => windows)];
		this.daylight = [...this.daylight, ...answers.flatMap(({ daylight }) => daylight)];
		this.daysDone = last.daysDone;
		this.daysInAll = last.daysInAll;
		if (first) this.#note('first', last.afterMs);
		if (last.daysDone < last.daysInAll) return;
		this.#note('year', last.afterMs);
		this.state = 'done';
	}

	#forgetTimer(): void {
		if (this.#timer !== null) clearTimeout(this.#timer);
		this.#timer = null;
	}

	/**
	 * Leaves a measure for the browser's performance tools: from the question to the answer as the page has
	 * it; its detail is the worker's own time since it had the plan.
	 */
	#note(what: 'first' | 'year', workerMs: number): void {
		performance.measure(`year sheet: ${what}`, { start: this.#startedMs, detail: { workerMs } });
	}

	#fail(message: string): void {
		this.fault = message;
		this.state = 'failed';
	}
}
