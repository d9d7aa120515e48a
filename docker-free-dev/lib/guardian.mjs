// A small process that outlives its parent by a few seconds. The parent tells it, line by line on
// standard input, which process groups it has started. When the pipe closes without a farewell the
// parent was killed: then every group is ended and the temporary folders are removed.
import { readdirSync, readFileSync, readlinkSync, rmSync } from 'node:fs';
import { createInterface } from 'node:readline';

/** @type {Map<number, { signal: NodeJS.Signals, dataDir?: string }>} */
const groups = new Map();
/** @type {Set<string>} */
const folders = new Set();
let farewell = false;

// A terminal's Ctrl-C or a hang-up is the parent's to handle; this process ends when the pipe does.
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) process.on(signal, () => {});
process.stdout.on('error', () => {});

for await (const line of createInterface({ input: process.stdin })) {
	const message = JSON.parse(line);
	if (message.add) groups.set(message.add, { signal: message.signal, dataDir: message.dataDir });
	if (message.remove) groups.delete(message.remove);
	if (message.folder) folders.add(message.folder);
	if (message.farewell) farewell = true;
}

if (!farewell) await endEverything();

async function endEverything() {
	for (const [pid, { signal }] of groups) send(pid, signal);
	await until(5_000, () => [...groups.keys()].every((pid) => !alive(-pid)));
	for (const pid of groups.keys()) send(-pid, 'SIGKILL');
	for (const { dataDir } of groups.values()) if (dataDir) killDatabase(dataDir);
	await until(2_000, () => [...groups.keys()].every((pid) => !alive(-pid)));
	for (const folder of folders) rmSync(folder, { recursive: true, force: true });
}

/**
 * @param {number} pid
 * @param {NodeJS.Signals} signal
 */
function send(pid, signal) {
	try {
		process.kill(pid, signal);
	} catch {
		// Gone already.
	}
}

/** @param {number} pid */
function alive(pid) {
	try {
		process.kill(pid, 0);
		return true;
	} catch {
		return false;
	}
}

/**
 * @param {number} ms
 * @param {() => boolean} done
 */
async function until(ms, done) {
	const end = Date.now() + ms;
	while (Date.now() < end && !done()) await new Promise((resolve) => setTimeout(resolve, 50));
}

/**
 * Each of the database's own processes leads a group of its own, so they are found by their folder.
 * @param {string} dataDir
 */
function killDatabase(dataDir) {
	for (const entry of readdirSync('/proc')) {
		if (!/^\d+$/.test(entry)) continue;
		try {
			const name = readFileSync(`/proc/${entry}/comm`, 'utf8').trim();
			if (name === 'postgres' && readlinkSync(`/proc/${entry}/cwd`) === dataDir) {
				send(Number(entry), 'SIGKILL');
			}
		} catch {
			// Ended while we looked.
		}
	}
}
