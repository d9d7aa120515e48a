import type { Guard } from '../lib/guard.ts';
import { LogFile } from '../lib/log-file.ts';
import { hasInProject, inProject, projectRoot } from '../lib/paths.ts';
import { LOOPBACK } from '../lib/ports.ts';
import { supervise, type Service } from '../lib/supervise.ts';
import { answers } from '../lib/wait.ts';
import type { Environment } from './environment.ts';

export interface WebOptions {
	port: number;
	origin: string;
	env: Environment;
	/** Folder of the built server; absent: the development server with hot reload. */
	buildDir?: string;
	logsDir: string;
	guard: Guard;
	notice?: (line: string) => void;
}

/** Starts the web server, built or for development, and waits until it says that it is ready. */
export async function startWeb(options: WebOptions): Promise<Service> {
	const { port, origin, buildDir } = options;
	// An application without the page for readiness is ready when it answers at all.
	const ready = hasInProject('src/routes/readyz')
		? () => answers(`${origin}/readyz`, (status) => status === 200)
		: () => answers(origin);
	const running = await supervise({
		name: 'web',
		command: process.execPath,
		args: buildDir
			? [`${buildDir}/index.js`]
			: [
					inProject('node_modules/vite/bin/vite.js'),
					...['dev', '--host', LOOPBACK, '--port', String(port), '--strictPort']
				],
		env: {
			...options.env,
			...(buildDir ? { NODE_ENV: 'production' } : {}),
			HOST: LOOPBACK,
			PORT: String(port),
			// A picture of ten megabytes and the form around it.
			BODY_SIZE_LIMIT: '12M',
			SHUTDOWN_TIMEOUT: '10'
		},
		cwd: projectRoot,
		log: new LogFile(options.logsDir, 'web'),
		guard: options.guard,
		ready,
		stopTimeoutMs: 15_000,
		notice: options.notice
	});
	return { name: 'web', address: origin, stop: () => running.stop(), pid: () => running.pid() };
}
