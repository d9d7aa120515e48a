import { adminQuery } from './database.ts';

/** Empties the queue of what earlier tests left in it. */
export async function emptyQueue(): Promise<void> {
	await adminQuery('delete from graphile_worker._private_jobs');
}

export interface StoredJob {
	id: string;
	key: string | null;
	payload: unknown;
	attempts: number;
	maxAttempts: number;
	runAt: Date;
	lastError: string | null;
	lockedBy: string | null;
}

/** The job with a key, as it lies in the queue. */
export async function jobWithKey(key: string): Promise<StoredJob | undefined> {
	const rows = await adminQuery<StoredJob>(
		`select id::text, key, payload, attempts::int, max_attempts::int as "maxAttempts",
			run_at as "runAt", last_error as "lastError", locked_by as "lockedBy"
		from graphile_worker._private_jobs where key = $1`,
		[key]
	);
	return rows[0];
}

/** The jobs of a task that lie in the queue. */
export function jobsOf(task: string): Promise<{ payload: { orderId: string } }[]> {
	return adminQuery(
		`select payload from graphile_worker._private_jobs j
		join graphile_worker._private_tasks t on t.id = j.task_id where t.identifier = $1`,
		[task]
	);
}
