/** A worker that answers beside the plan table; it ends with the page, or when it is terminated. */
export function openBesideWorker(): Worker {
	return new Worker(new URL('./beside.worker.ts', import.meta.url), { type: 'module' });
}
