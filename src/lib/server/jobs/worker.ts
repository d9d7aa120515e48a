import { run, Logger, type Runner, type TaskList } from 'graphile-worker';
import pg from 'pg';
import { env } from '../env';
import { log, plainError } from '../log';
import { attemptOf, handlers, type TaskPayloads } from './tasks';

/** Any number that only this lock uses. */
const activeWorkerLock = 7_240_301;

export interface Worker {
	/** Settles when the worker has ended: after `stop`, or by itself when its database went away. */
	ended: Promise<void>;
	/** Lets running jobs finish, then ends. */
	stop(): Promise<void>;
}

/**
 * Runs the jobs. One worker is active at a time: it holds a lock in the database for as long as its
 * connection lives, and a second one waits for that lock as a stand-by. So a worker that starts knows
 * that no other is alive, and can at once take over what a killed one had locked (graphile-worker
 * itself would wait four hours).
 * @throws when the database can not be reached
 */
export async function startWorker(concurrency = 4): Promise<Worker> {
	const connectionString = env().DATABASE_QUEUE_URL;
	if (!connectionString) throw new Error('DATABASE_QUEUE_URL is missing: the worker needs it');

	const guard = new pg.Client({ connectionString, application_name: 'bowkeeper worker lock' });
	let reportLost: (error: Error) => void = () => {};
	const lost = new Promise<never>((_, reject) => {
		reportLost = reject;
	});
	lost.catch(() => {});
	guard.on('error', (error) => reportLost(error));
	guard.on('end', () => reportLost(new Error('the worker lost its lock')));
	await guard.connect();
	await Promise.race([guard.query('select pg_advisory_lock($1)', [activeWorkerLock]), lost]);
	await guard.query(
		`select graphile_worker.force_unlock_workers(array(
			select distinct locked_by from graphile_worker._private_jobs where locked_by is not null
			union select distinct locked_by from graphile_worker._private_job_queues where locked_by is not null))`
	);

	const pool = new pg.Pool({ connectionString, max: concurrency + 4 });
	pool.on('error', (error) => log.warn({ err: error }, 'idle queue connection lost'));
	const runner = await run({
		pgPool: pool,
		taskList: taskList(),
		concurrency,
		noHandleSignals: true,
		pollInterval: 1000,
		crontab:
			'17 * * * * delete_expired {}\n*/30 * * * * read_forecasts {}\n5 6 * * * remind_of_water {}',
		logger: new Logger(() => (level, message, meta) => {
			// Messages of jobs, done or failed, would repeat what is logged below.
			if (level === 'error' && !message.startsWith('Failed task')) {
				log.error({ err: (meta as { error?: unknown } | undefined)?.error }, message);
			} else if (level === 'warning') log.warn(message);
			else log.debug(message);
		})
	});
	log.info('worker ready');
	return supervise(runner, pool, guard, lost);
}

function supervise(runner: Runner, pool: pg.Pool, guard: pg.Client, lost: Promise<never>): Worker {
	let stopping = false;
	const close = async () => {
		stopping = true;
		await runner
			.stop()
			.catch((error: unknown) => log.debug({ err: error }, 'runner already ended'));
		await pool.end().catch(() => {});
		await guard.end().catch(() => {});
	};
	const ended = Promise.race([runner.promise, lost]).catch(async (error: unknown) => {
		if (stopping) return;
		await close();
		throw error;
	});
	ended.catch(() => {});
	return { ended, stop: close };
}

function taskList(): TaskList {
	const list: TaskList = {};
	for (const name of Object.keys(handlers) as (keyof TaskPayloads)[]) {
		list[name] = async (payload, helpers) => {
			const started = performance.now();
			const attempt = attemptOf(helpers);
			// The payload was written by addJob, which is typed by the same table.
			const handler = handlers[name] as (payload: unknown, attempt: unknown) => Promise<void>;
			try {
				await handler(payload, attempt);
				log.info(
					{ task: name, job: helpers.job.id, ms: Math.round(performance.now() - started) },
					'job done'
				);
			} catch (error) {
				log.warn({ task: name, job: helpers.job.id, attempt, err: error }, 'job failed');
				// The queue keeps the message and shows it to the platform: nothing of a person in it.
				throw new Error(plainError(error).message, { cause: error });
			}
		};
	}
	return list;
}
