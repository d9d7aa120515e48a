// The first thing that runs on a fresh clone: plain Node.js without packages. It installs what is
// missing and hands over to the TypeScript part.
import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';

const root = path.resolve(path.dirname(fileURLToPath(import.meta.url)), '..');
const OLDEST_NODE = [20, 19];

const [command = 'start', ...args] = process.argv.slice(2);
checkNode();
installSystemPackages(command);
installNodePackages();
process.exitCode = await handOver();
// Whatever still has a timer or a socket open must not hold the end up.
process.exit();

function checkNode() {
	const [major = 0, minor = 0] = process.versions.node.split('.').map(Number);
	const [wantedMajor = 0, wantedMinor = 0] = OLDEST_NODE;
	if (major > wantedMajor || (major === wantedMajor && minor >= wantedMinor)) return;
	fail(`Node.js ${OLDEST_NODE.join('.')} or newer is needed; this is ${process.versions.node}.`);
}

/** @param {string} command */
function installSystemPackages(command) {
	if (command === 'reset') return;
	/** @type {string[]} */
	const missing = [];
	if (!hasPostgres()) missing.push('postgresql');
	if (command === 'test' && !existsSync('/usr/bin/chromium')) missing.push('chromium');
	if (missing.length === 0) return;
	const install = `apt-get install -y --no-install-recommends ${missing.join(' ')}`;
	if (!existsSync('/usr/bin/apt-get')) {
		fail(
			`Missing: ${missing.join(', ')}. Install them with your system's packages, then try again.`
		);
	}
	if (process.getuid?.() !== 0) fail(`Missing: ${missing.join(', ')}. Run: sudo ${install}`);
	console.log(`- installing ${missing.join(', ')} with apt`);
	// The lists may be absent or old: try as it is, then with fresh lists.
	if (!shell(install) && !(shell('apt-get update') && shell(install))) {
		fail(`That failed. Try it by hand: apt-get update && ${install}`);
	}
}

function hasPostgres() {
	const under = '/usr/lib/postgresql';
	return (
		existsSync(under) &&
		readdirSync(under).some((major) => existsSync(path.join(under, major, 'bin/postgres')))
	);
}

function installNodePackages() {
	const lock = readFileSync(path.join(root, 'package-lock.json'));
	const digest = createHash('sha256').update(lock).digest('hex');
	const stamp = path.join(root, 'node_modules/.installed-from');
	if (existsSync(stamp) && readFileSync(stamp, 'utf8') === digest) return;
	if (!existsSync(stamp) && installedMatches(lock.toString())) {
		writeFileSync(stamp, digest);
		return;
	}
	console.log('- installing npm packages');
	const npm = spawnSync('npm', ['ci', '--no-audit', '--no-fund'], {
		cwd: root,
		stdio: ['ignore', 'inherit', 'inherit'],
		// Development packages are needed whatever the surroundings say.
		env: { ...process.env, NODE_ENV: 'development' }
	});
	if (npm.status !== 0) fail('npm ci failed.');
	mkdirSync(path.dirname(stamp), { recursive: true });
	writeFileSync(stamp, digest);
}

/**
 * Whether somebody ran `npm ci` by hand: npm's own record of what is installed names every package
 * that this system needs of the lock file, in the same version.
 * @param {string} lock
 */
function installedMatches(lock) {
	const record = path.join(root, 'node_modules/.package-lock.json');
	if (!existsSync(record)) return false;
	/** @type {Record<string, { version?: string, optional?: boolean }>} */
	const wanted = JSON.parse(lock).packages;
	/** @type {Record<string, { version?: string }>} */
	const have = JSON.parse(readFileSync(record, 'utf8')).packages;
	return Object.entries(wanted).every(
		([name, { version, optional }]) =>
			name === '' || (have[name] ? have[name]?.version === version : optional === true)
	);
}

/** @returns {Promise<number>} */
async function handOver() {
	const { register } = await import(
		pathToFileURL(path.join(root, 'node_modules/tsx/dist/esm/api/index.mjs')).href
	);
	register();
	process.chdir(root);
	const { main } = await import(pathToFileURL(path.join(root, 'docker-free-dev/main.ts')).href);
	return main(command, args);
}

/** @param {string} line */
function shell(line) {
	const run = spawnSync('/bin/sh', ['-c', line], {
		stdio: ['ignore', 'inherit', 'inherit'],
		env: { ...process.env, DEBIAN_FRONTEND: 'noninteractive' }
	});
	return run.status === 0;
}

/**
 * @param {string} message
 * @returns {never}
 */
function fail(message) {
	console.error(message);
	process.exit(1);
}
