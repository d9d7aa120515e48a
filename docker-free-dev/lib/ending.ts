import { commandName, parentOf, startTicks } from './processes.ts';

export interface Ending {
	/** Whether somebody asked us to end. */
	readonly asked: boolean;
	readonly whenAsked: Promise<void>;
}

/**
 * Listens for what ends a run: Ctrl-C, a termination, a closed terminal, or the death of the npm that
 * started us. A second signal, more than two seconds later, ends at once: the guardian then tidies up.
 */
export function endWith(): Ending {
	let askedAt = 0;
	let resolve: () => void = () => {};
	const whenAsked = new Promise<void>((done) => {
		resolve = done;
	});
	const ask = () => {
		// npm hands the terminal's signal on although we had it already.
		if (askedAt && Date.now() - askedAt > 2_000) process.exit(1);
		askedAt ||= Date.now();
		resolve();
	};
	for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, ask);
	const npm = npmAbove();
	const watch = npm && setInterval(() => startTicks(npm) === undefined && ask(), 500);
	if (watch) watch.unref();
	// A promise alone does not keep a process alive.
	const alive = setInterval(() => {}, 60_000);
	void whenAsked.then(() => clearInterval(alive));
	return {
		get asked() {
			return askedAt > 0;
		},
		whenAsked
	};
}

/** The process id of the npm that runs this script, if one does. */
function npmAbove(): number | undefined {
	if (!process.env.npm_lifecycle_event) return undefined;
	let pid: number | undefined = process.ppid;
	for (let steps = 0; steps < 3 && pid && pid > 1; steps++) {
		if (commandName(pid).startsWith('npm')) return pid;
		pid = parentOf(pid);
	}
	return undefined;
}
