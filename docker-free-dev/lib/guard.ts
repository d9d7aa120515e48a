import { spawn, type ChildProcess } from 'node:child_process';
import { inProject } from './paths.ts';

/** A process group to end when this process is killed. */
export interface Guarded {
	pid: number;
	/** What its leader is asked with first. */
	signal: NodeJS.Signals;
	/** For the database: the folder by which its own children are found. */
	dataDir?: string;
}

/**
 * Tells a guardian process what this process has started, so that even `kill -9` of this process
 * leaves nothing behind. The guardian is started again should it die.
 */
export class Guard {
	#child: ChildProcess | undefined;
	#closing = false;
	#entries = new Map<number, Guarded>();
	#folders = new Set<string>();

	constructor() {
		this.#launch();
	}

	/** The guardian's process id. */
	get pid(): number {
		return this.#child?.pid ?? 0;
	}

	add(entry: Guarded): void {
		this.#entries.set(entry.pid, entry);
		this.#send({ add: entry.pid, signal: entry.signal, dataDir: entry.dataDir });
	}

	remove(pid: number): void {
		this.#entries.delete(pid);
		this.#send({ remove: pid });
	}

	/** A temporary folder that is to vanish with this process. */
	addFolder(folder: string): void {
		this.#folders.add(folder);
		this.#send({ folder });
	}

	/** Everything was stopped in order: the guardian may go. */
	async close(): Promise<void> {
		this.#closing = true;
		const child = this.#child;
		if (!child || child.exitCode !== null) return;
		const gone = new Promise((resolve) => child.once('exit', resolve));
		child.ref();
		this.#send({ farewell: true });
		child.stdin?.end();
		await gone;
	}

	#launch(): void {
		const child = spawn(process.execPath, [inProject('docker-free-dev/lib/guardian.mjs')], {
			detached: true,
			stdio: ['pipe', 'ignore', 'ignore'],
			env: { PATH: process.env.PATH }
		});
		this.#child = child;
		child.stdin.on('error', () => {});
		child.on('error', () => {});
		child.on('exit', () => {
			if (!this.#closing) setTimeout(() => !this.#closing && this.#launch(), 100).unref();
		});
		// The guardian alone must not keep this process alive.
		child.unref();
		for (const entry of this.#entries.values()) {
			this.#send({ add: entry.pid, signal: entry.signal, dataDir: entry.dataDir });
		}
		for (const folder of this.#folders) this.#send({ folder });
	}

	#send(message: object): void {
		this.#child?.stdin?.write(JSON.stringify(message) + '\n');
	}
}
