import { mkdtempSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { freshBuild } from '../../docker-free-dev/lib/build.ts';
import { Guard } from '../../docker-free-dev/lib/guard.ts';
import { anyFreePort } from '../../docker-free-dev/lib/ports.ts';
import type { Service } from '../../docker-free-dev/lib/supervise.ts';
import { startWeb } from '../../docker-free-dev/services/web.ts';
import { startWorker } from '../../docker-free-dev/services/worker.ts';

export interface TestProcess extends Service {
	/** Everything that the process wrote to its log. */
	log: () => string;
}

/** The application's settings as the test run has them, without the ways behind them. */
function applicationEnvironment(): Record<string, string> {
	return Object.fromEntries(
		Object.entries(process.env).flatMap(([name, value]) =>
			value === undefined || name.startsWith('TEST_') || name.startsWith('VITEST')
				? []
				: [[name, value]]
		)
	);
}

interface Setting {
	logsDir: string;
	guard: Guard;
	env: Record<string, string>;
}

async function run(
	more: Record<string, string>,
	start: (setting: Setting) => Promise<Service>
): Promise<TestProcess> {
	const logsDir = mkdtempSync(path.join(process.env.TEST_LOGS_DIR ?? '', 'process-'));
	const guard = new Guard();
	try {
		const env = { ...applicationEnvironment(), LOG_LEVEL: 'info', ...more };
		const service = await start({ logsDir, guard, env });
		return {
			...service,
			log: () => readFileSync(path.join(logsDir, `${service.name}.log`), 'utf8'),
			stop: async () => {
				await service.stop();
				await guard.close();
			}
		};
	} catch (error) {
		await guard.close();
		throw error;
	}
}

/** The worker as a process of its own on the run's database, started again when it dies. */
export function startTestWorker(more: Record<string, string> = {}): Promise<TestProcess> {
	return run(more, startWorker);
}

/** The built web server on the run's database; `address` says where. */
export async function startTestWeb(more: Record<string, string> = {}): Promise<TestProcess> {
	const buildDir = await freshBuild(() => {});
	const port = await anyFreePort();
	const origin = `http://127.0.0.1:${port}`;
	return run({ NODE_ENV: 'production', ORIGIN: origin, ...more }, (setting) =>
		startWeb({ ...setting, port, origin, buildDir })
	);
}
