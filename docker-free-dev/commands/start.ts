import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { endWith } from '../lib/ending.ts';
import { Guard } from '../lib/guard.ts';
import { Locked, takeLock } from '../lib/lock.ts';
import { hasInProject, localDir, makeLocalDir } from '../lib/paths.ts';
import { steadyPorts } from '../lib/ports.ts';
import { keptSecrets } from '../lib/secrets.ts';
import { startStack, type Stack } from '../stack.ts';
import { chooseHome, serverUser } from '../services/postgres-cluster.ts';
import { summary } from '../lib/summary.ts';

/**
 * `npm start` and `npm run dev`: everything on loopback until Ctrl-C.
 * @returns the exit code.
 */
export async function start(kind: 'start' | 'dev'): Promise<number> {
	const began = Date.now();
	const say = (line: string) => console.log(`- ${line}`);
	makeLocalDir();
	const guard = new Guard();
	const ending = endWith();
	let release: (() => void) | undefined;
	let stack: Stack | undefined;
	try {
		release = await takeLock(path.join(localDir, 'running'), kind, guard.pid);
		stack = await startStack({
			home: localDir,
			databaseHome: chooseHome(
				path.join(localDir, 'database'),
				path.join(localDir, 'database-home.json'),
				serverUser()
			),
			ports: await steadyPorts(path.join(localDir, 'ports.json')),
			secrets: keptSecrets(path.join(localDir, 'secrets.json')),
			guard,
			durable: true,
			application: kind === 'dev' ? 'development' : 'built',
			say,
			notice: say
		});
		if (!ending.asked) await demoOnce(stack, say);
		if (!ending.asked) {
			console.log(summary(stack));
			console.log(
				`Ready after ${((Date.now() - began) / 1000).toFixed(1)} s. Ctrl-C stops all of it.`
			);
		}
		await ending.whenAsked;
		console.log('\n- stopping');
		return 0;
	} catch (error) {
		console.error(error instanceof Error ? error.message : error);
		if (error instanceof Locked) console.error('Stop that one first, or use what it printed.');
		return 1;
	} finally {
		await stack?.stop();
		release?.();
		await guard.close();
	}
}

/** The demo is loaded once for each set of data: `npm run reset` drops the note along with the data. */
async function demoOnce(stack: Stack, say: (line: string) => void): Promise<void> {
	if (!hasInProject('src/bin/demo.ts')) return;
	const note = path.join(localDir, 'demo-loaded');
	if (existsSync(note) && readFileSync(note, 'utf8').trim() === 'yes') return;
	say('loading the demo');
	await stack.loadDemo();
	writeFileSync(note, 'yes\n');
}
