import type { PlaceQuestion } from '../question';
import type { PlaceWorker } from '../search';
import type { PlaceAnswer, PlaceRequest } from './messages';

/** More workers than this help little, and the machine has other things to do. */
const MOST_WORKERS = 4;

/** How many workers a machine is given. @param cores as the browser tells them; it need not */
export const workerCount = (cores: number | undefined): number =>
	Math.min(MOST_WORKERS, Math.max(1, Math.floor(cores ?? 1)));

function openWorker(): Worker {
	return new Worker(new URL('./place.worker.ts', import.meta.url), { type: 'module' });
}

/** The workers of a page. They are opened ahead, so that a search waits for no network. */
export class WorkerPool {
	#workers: Worker[] = [];

	/** Opens the workers, if they are not. */
	warm(): void {
		const missing = workerCount(navigator.hardwareConcurrency) - this.#workers.length;
		for (let i = 0; i < missing; i++) this.#workers.push(openWorker());
	}

	/** The workers with a question put to each. */
	put(question: PlaceQuestion): PlaceWorker[] {
		this.warm();
		return this.#workers.map((worker) => {
			const send = (request: PlaceRequest) => worker.postMessage(request);
			send({ kind: 'question', question });
			return (job) =>
				new Promise((resolve, reject) => {
					worker.onmessage = ({ data }: MessageEvent<PlaceAnswer>) => {
						if (data.kind === 'result') resolve(data.result as never);
						else reject(new Error(data.message));
					};
					worker.onerror = () => reject(new Error('The part that computes could not be started.'));
					send({ kind: 'job', job });
				});
		});
	}

	/** Ends all workers, whatever they are at. */
	end(): void {
		for (const worker of this.#workers.splice(0)) worker.terminate();
	}
}
