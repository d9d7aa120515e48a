import { spawn, type ChildProcess } from 'node:child_process';
import type { Guard } from './guard.ts';
import type { LogFile } from './log-file.ts';
import { sendSignal } from './processes.ts';
import { delay } from './wait.ts';

/** What every service is: something with a name, an address and a stop. */
export interface Service {
	name: string;
	address: string;
	/** Ends it in order; answers when it is gone. */
	stop(): Promise<void>;
	/** The process that runs it now; undefined between a death and the next start. */
	pid(): number | undefined;
}

export interface ProcessSpec {
	name: string;
	command: string;
	args: string[];
	env: Record<string, string>;
	cwd: string;
	/** The user to run as, when it is not ours. */
	user?: { uid: number; gid: number };
	log: LogFile;
	guard: Guard;
	/** Asked again and again until it answers true. */
	ready: () => Promise<boolean>;
	readyTimeoutMs?: number;
	stopSignal?: NodeJS.Signals;
	stopTimeoutMs?: number;
	/** Tidies up what a killed run left, before each start. */
	beforeStart?: () => Promise<void>;
	dataDir?: string;
	/** Told about deaths and returns. */
	notice?: (line: string) => void;
	/** Sees each line of output. */
	onLine?: (line: string) => void;
	/** False: its death is only reported. Default true. */
	restart?: boolean;
}

const FIRST_BACK_OFF_MS = 200;
const LONGEST_BACK_OFF_MS = 5_000;
/** A run as long as this counts as healthy, and the next death starts over with a short wait. */
const HEALTHY_MS = 10_000;

/**
 * Starts a process, waits until it is ready, and starts it again with back-off whenever it dies.
 * @throws Error when the first run ends or stays unready; the message carries the log's last lines.
 */
export async function supervise(spec: ProcessSpec): Promise<Pick<Service, 'stop' | 'pid'>> {
	const supervisor = new Supervisor(spec);
	await supervisor.first();
	return supervisor;
}

class Supervisor {
	#spec: ProcessSpec;
	#child: ChildProcess | undefined;
	#exited: Promise<void> = Promise.resolve();
	#stopping = false;
	#backOffMs = FIRST_BACK_OFF_MS;
	#wake: (() => void) | undefined;

	constructor(spec: ProcessSpec) {
		this.#spec = spec;
	}

	async first(): Promise<void> {
		await this.#spec.beforeStart?.();
		const end = this.#launch();
		const outcome = await Promise.race([end, this.#whenReady()]);
		if (outcome !== true) {
			await this.stop();
			const why = outcome === false ? 'did not get ready' : `ended at once (${outcome})`;
			const { name, log } = this.#spec;
			throw new Error(`${name} ${why}. The end of ${log.path}:\n${log.tail()}`);
		}
		void this.#keepUp(end);
	}

	pid(): number | undefined {
		const child = this.#child;
		return child && child.exitCode === null && child.signalCode === null ? child.pid : undefined;
	}

	async stop(): Promise<void> {
		this.#stopping = true;
		this.#wake?.();
		const child = this.#child;
		if (!child?.pid) return;
		const { pid } = child;
		if (child.exitCode === null && child.signalCode === null) {
			sendSignal(pid, this.#spec.stopSignal ?? 'SIGTERM');
		}
		const timer = setTimeout(() => sendSignal(-pid, 'SIGKILL'), this.#spec.stopTimeoutMs ?? 10_000);
		await this.#exited;
		clearTimeout(timer);
		sendSignal(-pid, 'SIGKILL');
		this.#spec.log.close();
	}

	/** Starts the process; the promise answers how it ended. */
	#launch(): Promise<string> {
		const spec = this.#spec;
		const child = spawn(spec.command, spec.args, {
			cwd: spec.cwd,
			env: spec.env,
			// A group of its own: the terminal's Ctrl-C reaches this process alone, which then stops the
			// services in their order.
			detached: true,
			stdio: ['ignore', 'pipe', 'pipe'],
			...spec.user
		});
		this.#child = child;
		if (child.pid) {
			spec.guard.add({
				pid: child.pid,
				signal: spec.stopSignal ?? 'SIGTERM',
				dataDir: spec.dataDir
			});
		}
		spec.log.write(`--- ${spec.name} started ${new Date().toISOString()} as ${child.pid}\n`);
		let rest = '';
		const take = (chunk: Buffer) => {
			const text = chunk.toString();
			spec.log.write(text);
			if (!spec.onLine) return;
			const lines = (rest + text).split('\n');
			rest = lines.pop() ?? '';
			for (const line of lines) spec.onLine(line);
		};
		child.stdout.on('data', take);
		child.stderr.on('data', take);
		const end = new Promise<string>((resolve) => {
			child.once('error', (error) => resolve(error.message));
			child.once('exit', (code, signal) => resolve(signal ?? `exit code ${code}`));
		});
		this.#exited = end.then((how) => {
			spec.log.write(`--- ${spec.name} ended: ${how}\n`);
			if (child.pid) {
				spec.guard.remove(child.pid);
				if (!this.#stopping) sendSignal(-child.pid, 'SIGKILL');
			}
		});
		return end;
	}

	async #whenReady(): Promise<boolean> {
		const child = this.#child;
		const until = Date.now() + (this.#spec.readyTimeoutMs ?? 60_000);
		while (Date.now() < until && !this.#stopping && child === this.#child) {
			if (child?.exitCode !== null || child.signalCode !== null) return false;
			if (await this.#spec.ready().catch(() => false)) return true;
			await delay(40);
		}
		return false;
	}

	async #keepUp(firstEnd: Promise<string>): Promise<void> {
		const { name, notice, beforeStart, restart } = this.#spec;
		let end = firstEnd;
		for (;;) {
			const since = Date.now();
			const how = await end;
			await this.#exited;
			if (this.#stopping) return;
			if (restart === false) {
				notice?.(`${name} ended (${how})`);
				return;
			}
			if (Date.now() - since > HEALTHY_MS) this.#backOffMs = FIRST_BACK_OFF_MS;
			notice?.(`${name} ended (${how}); starting it again`);
			await this.#pause(this.#backOffMs);
			this.#backOffMs = Math.min(this.#backOffMs * 2, LONGEST_BACK_OFF_MS);
			if (this.#stopping) return;
			try {
				await beforeStart?.();
			} catch (error) {
				this.#spec.log.write(`--- ${String(error)}\n`);
			}
			if (this.#stopping) return;
			end = this.#launch();
			void this.#whenReady().then((up) => up && !this.#stopping && notice?.(`${name} is back`));
		}
	}

	/** Waits, but not longer than until somebody stops us. */
	async #pause(ms: number): Promise<void> {
		await Promise.race([
			delay(ms),
			new Promise<void>((resolve) => {
				this.#wake = resolve;
			})
		]);
	}
}
