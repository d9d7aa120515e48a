import type { Guard } from '../lib/guard.ts';
import { LogFile } from '../lib/log-file.ts';
import { inProject, projectRoot, typescriptArgs } from '../lib/paths.ts';
import { LOOPBACK } from '../lib/ports.ts';
import { supervise, type Service } from '../lib/supervise.ts';
import { answers } from '../lib/wait.ts';
import { baseEnvironment } from './environment.ts';

export interface DoubleOptions {
	kind: 'payments' | 'forecast';
	port: number;
	/** Further arguments of `docker-free-dev/double.ts`. */
	args?: string[];
	env?: Record<string, string>;
	logsDir: string;
	guard: Guard;
	notice?: (line: string) => void;
}

/** Starts one double of an outside service as a process of its own. */
export async function startDouble(options: DoubleOptions): Promise<Service> {
	const { kind, port } = options;
	const address = `http://${LOOPBACK}:${port}`;
	const running = await supervise({
		name: kind,
		command: process.execPath,
		args: [
			...typescriptArgs(),
			inProject('docker-free-dev/double.ts'),
			...[kind, '--port', String(port)],
			...(options.args ?? [])
		],
		env: { ...baseEnvironment(), ...options.env },
		cwd: projectRoot,
		log: new LogFile(options.logsDir, kind),
		guard: options.guard,
		ready: () => answers(`${address}/_double/health`, (status) => status === 200),
		notice: options.notice
	});
	return { name: kind, address, stop: () => running.stop(), pid: () => running.pid() };
}
