import path from 'node:path';
import { freshBuild } from './lib/build.ts';
import { Guard } from './lib/guard.ts';
import { hasInProject } from './lib/paths.ts';
import type { Ports } from './lib/ports.ts';
import { runTool } from './lib/run-tool.ts';
import type { Secrets } from './lib/secrets.ts';
import type { Service } from './lib/supervise.ts';
import { environments, originOf, type Environments } from './services/environment.ts';
import { startForecast } from './services/forecast.ts';
import { startMaildev } from './services/maildev.ts';
import { startPayments } from './services/payments.ts';
import { startPostgres, type PostgresService } from './services/postgres.ts';
import { startWeb } from './services/web.ts';
import { startWorker } from './services/worker.ts';

export interface StackOptions {
	/** Folder for state and logs. */
	home: string;
	/** Folder of the database cluster. */
	databaseHome: string;
	ports: Ports;
	secrets: Secrets;
	guard: Guard;
	/** False for tests: a power cut may lose data. */
	durable: boolean;
	/** Which server to run: none, the built one, or the one for development. */
	application: 'none' | 'built' | 'development';
	/** Called for each step. */
	say: (line: string) => void;
	/** Told when a service dies or returns. */
	notice?: (line: string) => void;
	logLevel?: string;
}

export interface Stack {
	origin: string;
	database: PostgresService;
	mail: Service;
	payments: Service;
	forecast: Service;
	/** Absent when the stack runs no application. */
	worker: Service | undefined;
	web: Service | undefined;
	environments: Environments;
	logsDir: string;
	/** Loads the demo, telling the file that receives its sign-ins. */
	loadDemo(): Promise<void>;
	demoFile: string;
	/** Stops everything: web, worker, doubles, mail, database. */
	stop(): Promise<void>;
}

/**
 * Starts everything on loopback, one service after the other. When one fails, those already up are
 * stopped again.
 * @throws Error that names the service and shows the end of its log.
 */
export async function startStack(options: StackOptions): Promise<Stack> {
	const started: Service[] = [];
	const stop = async () => {
		for (let service = started.pop(); service; service = started.pop()) {
			await service.stop().catch(() => {});
		}
	};
	try {
		return await startAll(options, started, stop);
	} catch (error) {
		await stop();
		throw error;
	}
}

async function startAll(
	options: StackOptions,
	started: Service[],
	stop: () => Promise<void>
): Promise<Stack> {
	const { home, ports, secrets, guard, say, notice } = options;
	const logsDir = path.join(home, 'logs');
	const demoFile = path.join(home, 'demo.json');
	const common = { logsDir, guard, notice };
	const origin = originOf(ports);
	const keep = <T extends Service>(service: T): T => {
		started.push(service);
		return service;
	};

	const buildDir = options.application === 'built' ? await freshBuild(say) : undefined;

	say('starting the database, the mail catcher and the doubles');
	// Side by side; whichever came up is stopped again when another one fails.
	const [database, mail, payments, forecast] = await allOrNone(
		started,
		startPostgres({
			...common,
			home: options.databaseHome,
			port: ports.database,
			secrets,
			durable: options.durable
		}),
		startMaildev({
			...common,
			smtpPort: ports.smtp,
			webPort: ports.mail,
			mailDir: path.join(home, 'mail')
		}),
		startPayments({
			...common,
			port: ports.payments,
			stateDir: path.join(home, 'payments'),
			webhookUrl: `${origin}/api/v1/payments/webhook`,
			secrets
		}),
		startForecast({ ...common, port: ports.forecast })
	);

	const env = environments({
		ports,
		secrets,
		urls: database.urls,
		filesDir: path.join(home, 'files'),
		logLevel: options.logLevel ?? 'info'
	});
	const tool = { env: { ...env.tools, DEMO_FILE: demoFile }, logsDir, guard };

	if (hasInProject('src/bin/migrate.ts')) {
		say('migrating the database');
		await runTool({ ...tool, script: 'src/bin/migrate.ts' });
	}
	let worker: Service | undefined;
	let web: Service | undefined;
	if (options.application !== 'none') {
		const development = options.application === 'development';
		if (hasInProject('src/bin/worker.ts')) {
			say('starting the worker');
			worker = keep(await startWorker({ ...common, env: env.worker, watch: development }));
		}
		say('starting the web server');
		web = keep(await startWeb({ ...common, env: env.web, port: ports.web, origin, buildDir }));
	}

	return {
		origin,
		database,
		mail,
		payments,
		forecast,
		worker,
		web,
		environments: env,
		logsDir,
		demoFile,
		loadDemo: () => runTool({ ...tool, script: 'src/bin/demo.ts' }),
		stop
	};
}

/** Waits for all of them to settle; those that came up are noted, then the first failure is thrown. */
async function allOrNone<T extends readonly Promise<Service>[]>(
	started: Service[],
	...starting: T
): Promise<{ [K in keyof T]: Awaited<T[K]> }> {
	const settled = await Promise.allSettled(starting);
	for (const one of settled) if (one.status === 'fulfilled') started.push(one.value);
	for (const one of settled) if (one.status === 'rejected') throw one.reason;
	return (await Promise.all(starting)) as { [K in keyof T]: Awaited<T[K]> };
}
