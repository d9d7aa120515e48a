import { sql } from 'drizzle-orm';
import { setTimeout as wait } from 'node:timers/promises';
import journal from '../../../drizzle/meta/_journal.json';
import { inPublic } from './db/transaction';
import { log } from './log';
import { queueHealth, type QueueHealth } from './jobs/admin';
import { queueJobs, queueOldestSeconds } from './metrics';

export interface Readiness {
	ready: boolean;
	database: 'ok' | 'away';
	migrations: 'ok' | 'behind' | 'unknown';
	queue: 'ok' | 'late' | 'unknown';
	queueDetail: QueueHealth | null;
}

/** A job that is due and was not started for this long means that no worker runs. */
const lateAfterSeconds = 120;

const newestMigration = Math.max(...journal.entries.map((entry) => entry.when));

/** A probe wants an answer before the database's patience runs out. */
const probeMs = 2_000;

/** Whether this process can do its work: database, migrations, age of the queue. */
export async function readiness(): Promise<Readiness> {
	const tooSlow = new AbortController();
	try {
		return await Promise.race([look(), timeLimit(tooSlow.signal)]);
	} catch (error) {
		log.warn({ err: error }, 'not ready');
		return {
			ready: false,
			database: 'away',
			migrations: 'unknown',
			queue: 'unknown',
			queueDetail: null
		};
	} finally {
		tooSlow.abort();
	}
}

async function timeLimit(signal: AbortSignal): Promise<never> {
	await wait(probeMs, undefined, { signal });
	throw new Error(`the database did not answer in ${probeMs} ms`);
}

function look(): Promise<Readiness> {
	return inPublic({ actor: { kind: 'worker', name: 'readiness' } }, async (tx) => {
		const applied = await tx.sql.execute<{ newest: string | null }>(
			sql`select max(created_at) as newest from drizzle.__drizzle_migrations`
		);
		const migrations = Number(applied.rows[0]?.newest ?? 0) >= newestMigration ? 'ok' : 'behind';
		const detail = await queueHealth(tx);
		queueJobs.set({ state: 'waiting' }, detail.waiting);
		queueJobs.set({ state: 'failed' }, detail.failed);
		queueJobs.set({ state: 'given_up' }, detail.givenUp);
		queueOldestSeconds.set(detail.oldestDueSeconds);
		const queue = detail.oldestDueSeconds < lateAfterSeconds ? 'ok' : 'late';
		// A late queue is said and does not take the web server out: it still sells and lets people in.
		return {
			ready: migrations === 'ok',
			database: 'ok',
			migrations,
			queue,
			queueDetail: detail
		} as const;
	});
}
