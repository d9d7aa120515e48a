import { existsSync, readFileSync, rmSync } from 'node:fs';
import path from 'node:path';
import { lockedBy } from '../lib/lock.ts';
import { localDir, projectRoot } from '../lib/paths.ts';

/** `npm run reset`: drops the local data; refuses while a start is running. */
export async function reset(): Promise<number> {
	const held = lockedBy(path.join(localDir, 'running'));
	if (held) {
		console.error(`${held} Stop it first.`);
		return 1;
	}
	const memoFile = path.join(localDir, 'database-home.json');
	if (existsSync(memoFile)) {
		const memo = JSON.parse(readFileSync(memoFile, 'utf8')) as { project: string; home: string };
		if (memo.project === projectRoot) rmSync(memo.home, { recursive: true, force: true });
	}
	rmSync(localDir, { recursive: true, force: true });
	console.log('The local data is gone; the next start makes it anew.');
	return 0;
}
