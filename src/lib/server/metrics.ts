import { collectDefaultMetrics, Counter, Gauge, Histogram, Registry } from 'prom-client';
import { getPool } from './db/client';

/** What this process counts, in Prometheus's form. */
export const registry = new Registry();
collectDefaultMetrics({ register: registry });

const requestSeconds = new Histogram({
	name: 'bowkeeper_http_request_seconds',
	help: 'Time to answer a request, by route pattern',
	labelNames: ['method', 'route', 'status'],
	buckets: [0.005, 0.02, 0.05, 0.1, 0.3, 1, 3],
	registers: [registry]
});

const requests = new Counter({
	name: 'bowkeeper_http_requests_total',
	help: 'Requests answered, by status class',
	labelNames: ['class'],
	registers: [registry]
});

/** Jobs that wait, failed, or were given up; set by the readiness check. */
export const queueJobs = new Gauge({
	name: 'bowkeeper_queue_jobs',
	help: 'Jobs in the queue by state',
	labelNames: ['state'],
	registers: [registry]
});

export const queueOldestSeconds = new Gauge({
	name: 'bowkeeper_queue_oldest_due_seconds',
	help: 'Age of the oldest job that is due and not started',
	registers: [registry]
});

new Gauge({
	name: 'bowkeeper_database_connections',
	help: 'Connections of this process by state',
	labelNames: ['state'],
	registers: [registry],
	collect() {
		const pool = getPool();
		this.set({ state: 'idle' }, pool.idleCount);
		this.set({ state: 'used' }, pool.totalCount - pool.idleCount);
		this.set({ state: 'wanted' }, pool.waitingCount);
	}
});

/** Counts one answered request. */
export function observeRequest(
	method: string,
	route: string,
	status: number,
	seconds: number
): void {
	requestSeconds.observe({ method, route, status: String(status) }, seconds);
	requests.inc({ class: `${Math.floor(status / 100)}xx` });
}
