import type { Guard } from '../lib/guard.ts';
import { LogFile } from '../lib/log-file.ts';
import { inProject, projectRoot, typescriptArgs } from '../lib/paths.ts';
import { supervise, type Service } from '../lib/supervise.ts';
import type { Environment } from './environment.ts';

export interface WorkerOptions {
	env: Environment;
	/** Start again at each change of a source file. */
	watch?: boolean;
	logsDir: string;
	guard: Guard;
	notice?: (line: string) => void;
}

/** Starts the process that works the queue. It says `worker ready` in its log. */
export async function startWorker(options: WorkerOptions): Promise<Service> {
	const entry = inProject('src/bin/worker.ts');
	let ready = false;
	const running = await supervise({
		name: 'worker',
		command: process.execPath,
		args: options.watch
			? [inProject('node_modules/tsx/dist/cli.mjs'), 'watch', '--clear-screen=false', entry]
			: [...typescriptArgs(), entry],
		env: options.env,
		cwd: projectRoot,
		log: new LogFile(options.logsDir, 'worker'),
		guard: options.guard,
		onLine: (line) => {
			if (line.includes('worker ready')) ready = true;
		},
		beforeStart: async () => {
			ready = false;
		},
		ready: async () => ready,
		stopTimeoutMs: 15_000,
		notice: options.notice
	});
	return { name: 'worker', address: '', stop: () => running.stop(), pid: () => running.pid() };
}
