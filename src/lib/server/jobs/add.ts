import { sql } from 'drizzle-orm';
import type { PlainTx, TenantTx } from '../db/transaction';
import type { TaskPayloads } from './tasks';

export interface JobOptions {
	/** Not before this instant. */
	runAt?: Date;
	/** A second job with the same key replaces the first while it has not started. */
	key?: string;
	/** Jobs of one queue run one after another. */
	queue?: string;
	maxAttempts?: number;
}

/**
 * Adds a job in the transaction that causes it: it runs after the commit, or never when that rolls
 * back. A job carries ids only, no personal data.
 * @returns the job's id
 */
export async function addJob<Task extends keyof TaskPayloads>(
	tx: TenantTx | PlainTx,
	task: Task,
	payload: TaskPayloads[Task],
	options: JobOptions = {}
): Promise<string> {
	const result = await tx.sql.execute<{ id: string }>(
		sql`select queue.add_job(${task}, ${JSON.stringify(payload)}::json, ${options.runAt?.toISOString() ?? null}::timestamptz,
			${options.key ?? null}, ${options.queue ?? null}, ${options.maxAttempts ?? 25}) as id`
	);
	const row = result.rows[0];
	if (!row) throw new Error(`no job was added for ${task}`);
	return row.id;
}
