import { execFileSync, spawnSync } from 'node:child_process';
import {
	chmodSync,
	chownSync,
	existsSync,
	mkdirSync,
	readdirSync,
	readFileSync,
	renameSync,
	rmSync,
	writeFileSync
} from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { projectKey, projectRoot } from '../lib/paths.ts';
import { delay } from '../lib/wait.ts';
import { commandName, processesIn, sendSignal } from '../lib/processes.ts';

const INSTALLED_UNDER = '/usr/lib/postgresql';
const OLDEST_MAJOR = 15;

/** The user that the database server runs as; undefined: ourselves. */
export type ServerUser = { uid: number; gid: number } | undefined;

/**
 * PostgreSQL refuses to run as root, so root hands it to the packages' own user.
 * @throws Error when that user is missing.
 */
export function serverUser(): ServerUser {
	if (process.getuid?.() !== 0) return undefined;
	const id = (flag: string) =>
		Number(execFileSync('id', [flag, 'postgres'], { encoding: 'utf8' }).trim());
	return { uid: id('-u'), gid: id('-g') };
}

/**
 * The folder of the server's programs: of the version that made `dataDir` when it exists, else the
 * newest installed.
 * @throws Error when none fits.
 */
export function findBinaries(dataDir: string): string {
	const majors = existsSync(INSTALLED_UNDER)
		? readdirSync(INSTALLED_UNDER)
				.map(Number)
				.filter((major) => existsSync(path.join(INSTALLED_UNDER, String(major), 'bin/postgres')))
				.sort((a, b) => b - a)
		: [];
	const versionFile = path.join(dataDir, 'PG_VERSION');
	const made = existsSync(versionFile) ? Number(readFileSync(versionFile, 'utf8')) : undefined;
	const chosen = made ? majors.find((major) => major === made) : majors[0];
	if (!chosen || chosen < OLDEST_MAJOR) {
		throw new Error(
			made
				? `The data in ${dataDir} was made by PostgreSQL ${made}, which is not installed.`
				: `PostgreSQL ${OLDEST_MAJOR} or newer is not installed: apt-get install postgresql`
		);
	}
	return path.join(INSTALLED_UNDER, String(chosen), 'bin');
}

/**
 * A folder under which the server's user may keep its data. That is `wanted`, unless it lies where
 * that user can not pass (a home folder of root's, say): then one outside, named after the checkout
 * and remembered in `memoFile`.
 */
export function chooseHome(wanted: string, memoFile: string, user: ServerUser): string {
	if (!user) return makeHome(wanted, user);
	if (existsSync(memoFile)) {
		const memo = JSON.parse(readFileSync(memoFile, 'utf8')) as { project: string; home: string };
		// A copied checkout must not share its origin's data.
		if (memo.project === projectRoot) return makeHome(memo.home, user);
	}
	if (canPass(path.dirname(wanted), user)) return makeHome(wanted, user);
	const home = path.join(outsideFolder(user), `bowkeeper-${projectKey()}`);
	writeFileSync(memoFile, JSON.stringify({ project: projectRoot, home }, null, '\t') + '\n');
	return makeHome(home, user);
}

/** A place outside of the checkout that the server's user can reach. */
export function outsideFolder(user: ServerUser): string {
	const places = [os.tmpdir(), '/var/tmp', '/tmp'];
	const durable = ['/var/lib', ...places];
	return durable.find((place) => existsSync(place) && canPass(place, user)) ?? '/var/tmp';
}

/** Whether the server's user can pass through `folder`. */
export function canPass(folder: string, user: ServerUser): boolean {
	return spawnSync('/usr/bin/test', ['-x', folder], user ?? {}).status === 0;
}

function makeHome(home: string, user: ServerUser): string {
	mkdirSync(home, { recursive: true, mode: 0o700 });
	if (user) chownSync(home, user.uid, user.gid);
	chmodSync(home, 0o700);
	return home;
}

/** Makes the cluster in `home`/data unless it is there. A kill in between leaves no half cluster. */
export function makeCluster(home: string, user: ServerUser, password: string): string {
	const dataDir = path.join(home, 'data');
	if (existsSync(dataDir)) return dataDir;
	const making = path.join(home, 'data.making');
	rmSync(making, { recursive: true, force: true });
	const passwordFile = path.join(home, 'password');
	writeFileSync(passwordFile, password + '\n', { mode: 0o600 });
	if (user) chownSync(passwordFile, user.uid, user.gid);
	const initdb = spawnSync(
		path.join(findBinaries(dataDir), 'initdb'),
		[
			`--pgdata=${making}`,
			'--username=postgres',
			'--auth-host=scram-sha-256',
			'--auth-local=reject',
			`--pwfile=${passwordFile}`,
			'--encoding=UTF8',
			'--locale=C.UTF-8',
			'--no-instructions'
		],
		{ cwd: home, env: { PATH: process.env.PATH, LC_ALL: 'C.UTF-8' }, encoding: 'utf8', ...user }
	);
	rmSync(passwordFile);
	if (initdb.status !== 0) throw new Error(`initdb failed:\n${initdb.stdout}${initdb.stderr}`);
	renameSync(making, dataDir);
	return dataDir;
}

/**
 * Ends what a killed run left of this cluster's server, and removes a lock file that names a process
 * which is no database server.
 */
export async function clearLeftovers(dataDir: string): Promise<void> {
	const lockFile = path.join(dataDir, 'postmaster.pid');
	if (existsSync(lockFile)) {
		const pid = Number(readFileSync(lockFile, 'utf8').split('\n')[0]);
		if (commandName(pid) !== 'postgres') rmSync(lockFile, { force: true });
	}
	for (let round = 0; round < 100; round++) {
		const left = processesIn(dataDir, 'postgres');
		if (left.length === 0) return;
		// First a fast shutdown, which keeps the data tidy; then whatever it takes.
		for (const pid of left) sendSignal(pid, round < 40 ? 'SIGINT' : 'SIGKILL');
		await delay(50);
	}
}
