import { spawn } from 'node:child_process';
import path from 'node:path';
import { expect, test } from 'vitest';
import { freshBuild } from '../../../docker-free-dev/lib/build.ts';
import { inProject, typescriptArgs } from '../../../docker-free-dev/lib/paths.ts';
import { anyFreePort } from '../../../docker-free-dev/lib/ports.ts';

async function startWrongly(args: string[]): Promise<{ code: number | null; said: string }> {
	const child = spawn(process.execPath, args, {
		cwd: inProject(),
		stdio: ['ignore', 'pipe', 'pipe'],
		env: {
			PATH: process.env.PATH,
			HOST: '127.0.0.1',
			PORT: String(await anyFreePort()),
			SECRET_KEY: 'hunter2',
			DATABASE_URL: 'mysql://root@127.0.0.1/x'
		}
	});
	let said = '';
	for (const stream of [child.stdout, child.stderr]) {
		stream.on('data', (chunk: Buffer) => (said += chunk.toString()));
	}
	const code = await new Promise<number | null>((resolve) => child.once('close', resolve));
	return { code, said };
}

test.each([
	['web server', async () => [path.join(await freshBuild(() => {}), 'index.js')]],
	['worker', async () => [...typescriptArgs(), inProject('src/bin/worker.ts')]]
])('the %s does not start in a wrong environment and names every fault', async (_, args) => {
	const { code, said } = await startWrongly(await args());
	expect(code).not.toBe(0);
	expect(said).toContain('The environment is not usable');
	for (const name of ['DATABASE_URL', 'ORIGIN', 'SECRET_KEY', 'SMTP_URL', 'FORECAST_API_URL']) {
		expect(said).toContain(name);
	}
	expect(said).not.toContain('hunter2');
});
