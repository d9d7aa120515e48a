import { randomBytes } from 'node:crypto';
import { existsSync, mkdtempSync, rmSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { Guard } from './lib/guard.ts';
import { hasInProject } from './lib/paths.ts';
import { freePorts } from './lib/ports.ts';
import { newSecrets } from './lib/secrets.ts';
import { startStack, type Stack } from './stack.ts';
import { canPass, chooseHome, serverUser } from './services/postgres-cluster.ts';

export interface TestStack extends Stack {
	/** Temporary folder with the logs; it vanishes with the stack. */
	home: string;
}

export interface TestStackOptions {
	/** Whether the demo is loaded. Default: when the application runs. */
	demo?: boolean;
	/** Whether a commit that was answered survives a kill of the database. Default: no, for speed. */
	durable?: boolean;
}

/**
 * Starts a throw-away stack for tests: free ports, a fresh cluster, a folder that vanishes. It runs beside a started application and beside other test runs.
 *
 * @param application whether web, worker and demo run as well (browser tests) or only what the tests
 *   of the services call (database, mail catcher, doubles).
 */
export async function startTestStack(
	application: boolean,
	{ demo = application, durable = false }: TestStackOptions = {}
): Promise<TestStack> {
	const user = serverUser();
	const under = [os.tmpdir(), '/var/tmp', '/tmp'].find(
		(place) => existsSync(place) && canPass(place, user)
	);
	if (!under) throw new Error('No temporary folder that the database server can reach.');
	const home = mkdtempSync(path.join(under, 'bowkeeper-test-'));
	const guard = new Guard();
	guard.addFolder(home);
	const clean = async () => {
		rmSync(home, { recursive: true, force: true });
		await guard.close();
	};
	try {
		const databaseHome = path.join(
			under,
			`${path.basename(home)}-${randomBytes(3).toString('hex')}`
		);
		guard.addFolder(databaseHome);
		const stack = await startStack({
			home,
			databaseHome: chooseHome(databaseHome, path.join(home, 'database-home.json'), user),
			ports: await freePorts(),
			secrets: newSecrets(),
			guard,
			durable,
			application: application ? 'built' : 'none',
			say: () => {},
			// The services' own warnings would only stand between the tests' names.
			logLevel: application ? 'info' : 'fatal'
		});
		if (demo && hasInProject('src/bin/demo.ts')) await stack.loadDemo();
		return {
			...stack,
			home,
			stop: async () => {
				await stack.stop();
				rmSync(databaseHome, { recursive: true, force: true });
				await clean();
			}
		};
	} catch (error) {
		await clean();
		throw error;
	}
}

/** What tests read from `process.env`: the application's own settings and the ways behind them. */
export function testEnvironment(stack: TestStack): Record<string, string> {
	return {
		...stack.environments.tools,
		DEMO_FILE: stack.demoFile,
		TEST_ADMIN_DATABASE_URL: stack.database.urls.admin,
		TEST_MAIL_API: stack.mail.address,
		TEST_PAYMENT_DOUBLE: stack.payments.address,
		TEST_FORECAST_DOUBLE: stack.forecast.address,
		TEST_LOGS_DIR: stack.logsDir
	};
}
