import { spawn } from 'node:child_process';
import { createHash } from 'node:crypto';
import {
	cpSync,
	existsSync,
	mkdirSync,
	readdirSync,
	readFileSync,
	renameSync,
	rmSync,
	statSync,
	writeFileSync
} from 'node:fs';
import path from 'node:path';
import { LogFile } from './log-file.ts';
import { startTicks } from './processes.ts';
import { hasInProject, inProject, localDir, makeLocalDir, projectRoot } from './paths.ts';
import { delay } from './wait.ts';

/** Top-level parts of the checkout that a build does not read. */
const NOT_BUILT_FROM = new Set([
	...['node_modules', 'build', 'tests', 'test-results', 'docker-free-dev', 'drizzle'],
	...['README.md', 'DEVELOPERS.md', 'CHANGELOG.md', 'LICENSE', 'playwright.config.ts']
]);
const DAY_MS = 86_400_000;

/** A digest of everything that the build is made from. */
export function sourceDigest(): string {
	const hash = createHash('sha256');
	const visit = (relative: string) => {
		const absolute = inProject(relative);
		if (statSync(absolute).isFile()) {
			hash.update(relative).update('\0').update(readFileSync(absolute)).update('\0');
			return;
		}
		// A folder that ignores itself is made by the build, not read by it.
		const ignore = path.join(absolute, '.gitignore');
		if (existsSync(ignore) && /^\*$/m.test(readFileSync(ignore, 'utf8'))) return;
		for (const name of readdirSync(absolute).sort()) visit(path.join(relative, name));
	};
	for (const name of readdirSync(projectRoot).sort()) {
		if (!name.startsWith('.') && !NOT_BUILT_FROM.has(name)) visit(name);
	}
	return hash.digest('hex').slice(0, 16);
}

/**
 * The folder of a server built from the sources as they are now; builds when there is none. Each build
 * is run from a copy, so that building again never pulls files from under a running server.
 * @throws Error when the build fails; it ends with the last lines of the builder.
 */
export async function freshBuild(say: (line: string) => void): Promise<string> {
	makeLocalDir();
	const digest = sourceDigest();
	const kept = path.join(localDir, 'web', digest);
	// The worker and the tests need the generated tsconfig as well.
	if (existsSync(path.join(kept, 'index.js')) && hasInProject('.svelte-kit/tsconfig.json')) {
		return kept;
	}
	const release = await takeBuildTurn();
	try {
		say('building the web server');
		await build();
		keep(kept);
		return kept;
	} finally {
		release();
	}
}

/** Runs the builder; what it has to say goes to a log file. */
async function build(): Promise<void> {
	const log = new LogFile(path.join(localDir, 'logs'), 'build');
	const child = spawn(process.execPath, [inProject('node_modules/vite/bin/vite.js'), 'build'], {
		cwd: projectRoot,
		stdio: ['ignore', 'pipe', 'pipe']
	});
	for (const stream of [child.stdout, child.stderr]) {
		stream.on('data', (chunk: Buffer) => log.write(chunk.toString()));
	}
	const code = await new Promise<number | null>((resolve, reject) => {
		child.once('error', reject);
		child.once('close', resolve);
	});
	log.close();
	if (code !== 0) throw new Error(`The build failed. The end of ${log.path}:\n${log.tail(40)}`);
}

function keep(kept: string): void {
	mkdirSync(path.dirname(kept), { recursive: true });
	for (const old of readdirSync(path.dirname(kept))) {
		const folder = path.join(path.dirname(kept), old);
		if (Date.now() - statSync(folder).mtimeMs > DAY_MS) {
			rmSync(folder, { recursive: true, force: true });
		}
	}
	const making = `${kept}.${process.pid}`;
	cpSync(inProject('build'), making, { recursive: true });
	rmSync(kept, { recursive: true, force: true });
	renameSync(making, kept);
	writeFileSync(path.join(kept, 'built.txt'), new Date().toISOString() + '\n');
}

/** Two builds of one checkout at a time would write over each other. */
async function takeBuildTurn(): Promise<() => void> {
	const file = path.join(localDir, 'building');
	for (;;) {
		try {
			writeFileSync(file, `${process.pid} ${startTicks(process.pid)}`, { flag: 'wx' });
			return () => rmSync(file, { force: true });
		} catch {
			const [pid, ticks] = existsSync(file) ? readFileSync(file, 'utf8').split(' ') : [];
			if (pid && startTicks(Number(pid)) !== ticks) rmSync(file, { force: true });
			else await delay(200);
		}
	}
}
