import path from 'node:path';
import pg from 'pg';
import type { Guard } from '../lib/guard.ts';
import { LogFile } from '../lib/log-file.ts';
import { LOOPBACK } from '../lib/ports.ts';
import type { Secrets } from '../lib/secrets.ts';
import { supervise, type Service } from '../lib/supervise.ts';
import { clearLeftovers, findBinaries, makeCluster, serverUser } from './postgres-cluster.ts';
import { DATABASE, ensureRoles } from './postgres-roles.ts';

export interface PostgresOptions {
	/** Folder of the cluster, which the server's user can reach. */
	home: string;
	port: number;
	secrets: Secrets;
	/** False for tests alone: quicker, and a power cut may lose data. */
	durable: boolean;
	logsDir: string;
	guard: Guard;
	notice?: (line: string) => void;
}

export interface PostgresService extends Service {
	/** Connection addresses by role. */
	urls: { admin: string; owner: string; app: string; queue: string };
}

/** Starts PostgreSQL on loopback with the project's roles and database, made on first use. */
export async function startPostgres(options: PostgresOptions): Promise<PostgresService> {
	const { home, port, secrets, durable, guard } = options;
	const user = serverUser();
	const dataDir = makeCluster(home, user, secrets.superuserPassword);
	const binaries = findBinaries(dataDir);
	const address = (role: string, password: string, database = DATABASE) =>
		`postgres://${role}:${encodeURIComponent(password)}@${LOOPBACK}:${port}/${database}`;
	const admin = address('postgres', secrets.superuserPassword, 'postgres');
	const settings: Record<string, string | number> = {
		listen_addresses: LOOPBACK,
		port,
		unix_socket_directories: '',
		max_connections: 120,
		timezone: 'UTC',
		log_timezone: 'UTC',
		log_line_prefix: '%m [%p] %u ',
		jit: 'off',
		...(durable ? {} : { fsync: 'off', synchronous_commit: 'off', full_page_writes: 'off' })
	};
	const running = await supervise({
		name: 'database',
		command: path.join(binaries, 'postgres'),
		args: [
			'-D',
			dataDir,
			...Object.entries(settings).flatMap(([key, value]) => ['-c', `${key}=${value}`])
		],
		// Nothing of PGPORT, PGDATA and their like may reach it.
		env: { PATH: process.env.PATH ?? '', LC_ALL: 'C.UTF-8' },
		cwd: home,
		user,
		log: new LogFile(options.logsDir, 'database'),
		guard,
		dataDir,
		// SIGINT is PostgreSQL's fast shutdown: sessions are cut, data is written out.
		stopSignal: 'SIGINT',
		stopTimeoutMs: 20_000,
		beforeStart: () => clearLeftovers(dataDir),
		ready: () => canConnect(admin),
		notice: options.notice
	});
	await ensureRoles(admin, secrets);
	return {
		name: 'database',
		address: `${LOOPBACK}:${port}`,
		urls: {
			admin: address('postgres', secrets.superuserPassword),
			owner: address('bowkeeper_owner', secrets.ownerPassword),
			app: address('bowkeeper_app', secrets.appPassword),
			queue: address('bowkeeper_queue', secrets.queuePassword)
		},
		stop: () => running.stop(),
		pid: () => running.pid()
	};
}

async function canConnect(url: string): Promise<boolean> {
	const client = new pg.Client({ connectionString: url, connectionTimeoutMillis: 2_000 });
	client.on('error', () => {});
	try {
		await client.connect();
		return true;
	} catch {
		return false;
	} finally {
		await client.end().catch(() => {});
	}
}
