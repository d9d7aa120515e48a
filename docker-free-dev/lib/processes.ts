import { readdirSync, readFileSync, readlinkSync } from 'node:fs';

/** When a process began, in the kernel's ticks: tells a process from a later one with the same id. */
export function startTicks(pid: number): string | undefined {
	try {
		const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
		// The command's name may hold blanks and brackets: count fields behind its closing bracket.
		const fields = stat.slice(stat.lastIndexOf(')') + 2).split(' ');
		if (fields[0] === 'Z') return undefined;
		return fields[19];
	} catch {
		return undefined;
	}
}

/** The parent's id, or undefined when the process is gone. */
export function parentOf(pid: number): number | undefined {
	try {
		const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
		return Number(stat.slice(stat.lastIndexOf(')') + 2).split(' ')[1]);
	} catch {
		return undefined;
	}
}

/** The short name that the kernel shows for a process. */
export function commandName(pid: number): string {
	try {
		return readFileSync(`/proc/${pid}/comm`, 'utf8').trim();
	} catch {
		return '';
	}
}

/** Sends a signal to a process (or, with a negative id, to a group); false when it is gone. */
export function sendSignal(pid: number, signal: NodeJS.Signals): boolean {
	try {
		process.kill(pid, signal);
		return true;
	} catch {
		return false;
	}
}

/** Ids of the processes that stand in `folder` and carry the kernel name `name`. */
export function processesIn(folder: string, name: string): number[] {
	return readdirSync('/proc')
		.filter((entry) => /^\d+$/.test(entry))
		.map(Number)
		.filter((pid) => {
			if (commandName(pid) !== name) return false;
			try {
				return readlinkSync(`/proc/${pid}/cwd`) === folder;
			} catch {
				return false;
			}
		});
}
