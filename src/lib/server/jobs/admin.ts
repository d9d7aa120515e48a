import { sql } from 'drizzle-orm';
import { demandPlatform } from '../auth/rights';
import type { PlainTx } from '../db/transaction';

/** A job as the queue page shows it. */
export interface QueuedJob {
	id: string;
	task: string;
	payload: Record<string, unknown>;
	attempts: number;
	maxAttempts: number;
	runAt: Date;
	lastError: string | null;
	createdAt: Date;
	running: boolean;
}

export interface QueueHealth {
	/** Jobs that will still be tried. */
	waiting: number;
	/** Of these, jobs whose last try failed. */
	failed: number;
	/** Jobs that used up their tries and wait for a person. */
	givenUp: number;
	/** Age of the oldest job that is due and not started, in seconds. */
	oldestDueSeconds: number;
}

/** Jobs in the queue, those that gave up first. */
export async function listJobs(
	tx: PlainTx,
	{ onlyFailed, most, skip }: { onlyFailed: boolean; most: number; skip: number }
): Promise<QueuedJob[]> {
	demandPlatform(tx);
	const result = await tx.sql.execute<{
		id: string;
		task: string;
		payload: Record<string, unknown>;
		attempts: number;
		max_attempts: number;
		run_at: Date | string;
		last_error: string | null;
		created_at: Date | string;
		running: boolean;
	}>(sql`select * from queue.list_jobs(${onlyFailed}, ${most}, ${skip})`);
	return result.rows.map((row) => ({
		id: row.id,
		task: row.task,
		payload: row.payload,
		attempts: row.attempts,
		maxAttempts: row.max_attempts,
		runAt: new Date(row.run_at),
		lastError: row.last_error,
		createdAt: new Date(row.created_at),
		running: row.running
	}));
}

/** Lets a job run now; false when it is gone or running. */
export async function retryJob(tx: PlainTx, jobId: string): Promise<boolean> {
	demandPlatform(tx);
	const result = await tx.sql.execute<{ done: boolean }>(
		sql`select queue.retry_job(${jobId}::bigint) as done`
	);
	return result.rows[0]?.done ?? false;
}

export async function queueHealth(tx: PlainTx): Promise<QueueHealth> {
	const result = await tx.sql.execute<{
		waiting: string;
		failed: string;
		given_up: string;
		oldest_due_seconds: number;
	}>(sql`select * from queue.health()`);
	const row = result.rows[0];
	if (!row) throw new Error('the queue did not answer');
	return {
		waiting: Number(row.waiting),
		failed: Number(row.failed),
		givenUp: Number(row.given_up),
		oldestDueSeconds: row.oldest_due_seconds
	};
}
