import { setTimeout as wait } from 'node:timers/promises';
import pg from 'pg';
import { env } from '../env';
import { log } from '../log';

/** How long a request waits for a database that is just coming back, in milliseconds. */
const patienceMs = 8_000;

/** Errors that say "no connection now", before any statement was sent. */
const notThereYet = new Set(['ECONNREFUSED', 'ECONNRESET', 'ENOENT', '57P03', '57P01', '53300']);

function isNotThereYet(error: unknown): boolean {
	if (!(error instanceof Error)) return false;
	const code = (error as { code?: unknown }).code;
	return (
		(typeof code === 'string' && notThereYet.has(code)) ||
		error.message === 'Connection terminated unexpectedly'
	);
}

let pool: pg.Pool | undefined;
let sidePool: pg.Pool | undefined;

function makePool(max: number): pg.Pool {
	const made = new pg.Pool({
		connectionString: env().DATABASE_URL,
		max,
		idleTimeoutMillis: 30_000,
		connectionTimeoutMillis: 5_000,
		statement_timeout: 30_000,
		idle_in_transaction_session_timeout: 60_000,
		application_name: 'bowkeeper'
	});
	// An idle connection that breaks is dropped by the pool; without a listener the process would end.
	made.on('error', (error) => log.warn({ err: error }, 'idle database connection lost'));
	return made;
}

/** The process's connections as the application's role. */
export function getPool(): pg.Pool {
	pool ??= makePool(12);
	return pool;
}

/**
 * Connections for single statements that stay whatever becomes of the transaction around them. They
 * are apart, so that transactions which hold every other connection never wait for one more.
 */
export function getSidePool(): pg.Pool {
	sidePool ??= makePool(3);
	return sidePool;
}

/**
 * A connection on which `opening` (what begins a transaction) has run. While the database restarts
 * this waits up to eight seconds, so that a request in that moment is late and not lost. Nothing but
 * the opening was sent, so trying again is safe.
 * @param onError hears of a connection that breaks, from its first moment on: unheard, that would end
 *   the process
 * @throws the last connection error when the database stays away
 */
export async function connect(
	opening: string,
	onError: (error: Error) => void
): Promise<pg.PoolClient> {
	const until = Date.now() + patienceMs;
	for (let delayMs = 50; ; delayMs = Math.min(delayMs * 2, 800)) {
		try {
			const client = await getPool().connect();
			client.on('error', onError);
			try {
				await client.query(opening);
				return client;
			} catch (error) {
				client.release(true);
				throw error;
			}
		} catch (error) {
			if (!isNotThereYet(error) || Date.now() + delayMs > until) throw error;
			await wait(delayMs);
		}
	}
}

/** Ends the connections; for a graceful stop. */
export async function closePool(): Promise<void> {
	const ending = [pool, sidePool];
	pool = undefined;
	sidePool = undefined;
	await Promise.all(ending.map((one) => one?.end()));
}
