/** A worker that computes years; it ends with the page, or when it is terminated. */
export function openYearWorker(): Worker {
	return new Worker(new URL('./year.worker.ts', import.meta.url), { type: 'module' });
}
