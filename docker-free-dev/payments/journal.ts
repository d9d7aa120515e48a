import {
	closeSync,
	existsSync,
	fdatasyncSync,
	fsyncSync,
	mkdirSync,
	openSync,
	readFileSync,
	renameSync,
	rmSync,
	truncateSync,
	writeFileSync,
	writeSync
} from 'node:fs';
import path from 'node:path';
import { startTicks } from '../lib/processes.ts';
import type { Kind, Kinds } from './store.ts';

/** kind, owner, id, order, value; a value of null takes the row away. */
export type JournalRow = [Kind, string, string, number, Kinds[Kind] | null];

/**
 * A file to which every set of changes is added as one line and forced to the disk before the answer
 * goes out. A line cut off by a kill was never answered for and is dropped.
 */
export class Journal {
	#file: string;
	#fd = -1;

	#holder: string;

	/**
	 * @param folder where it lies; made when missing.
	 * @throws Error when another process that runs has it.
	 */
	constructor(folder: string) {
		mkdirSync(folder, { recursive: true, mode: 0o700 });
		this.#holder = path.join(folder, 'holder');
		this.#hold(folder);
		this.#file = path.join(folder, 'journal.jsonl');
	}

	/** Every row ever put, oldest first. */
	read(): JournalRow[] {
		if (!existsSync(this.#file)) return [];
		const text = readFileSync(this.#file, 'utf8');
		const whole = text.slice(0, text.lastIndexOf('\n') + 1);
		if (whole.length < text.length) truncateSync(this.#file, Buffer.byteLength(whole));
		return whole
			.split('\n')
			.filter((line) => line !== '')
			.flatMap((line) => JSON.parse(line) as JournalRow[]);
	}

	/** Writes the rows that still stand to a new file and puts it in the old one's place. */
	compact(rows: Iterable<JournalRow>): void {
		const making = `${this.#file}.new`;
		const fd = openSync(making, 'w', 0o600);
		for (const row of rows) writeSync(fd, JSON.stringify([row]) + '\n');
		fsyncSync(fd);
		closeSync(fd);
		renameSync(making, this.#file);
		this.#fd = openSync(this.#file, 'a', 0o600);
	}

	append(rows: JournalRow[]): void {
		writeSync(this.#fd, JSON.stringify(rows) + '\n');
		fdatasyncSync(this.#fd);
	}

	close(): void {
		if (this.#fd < 0) return;
		closeSync(this.#fd);
		this.#fd = -1;
		rmSync(this.#holder, { force: true });
	}

	/** Two doubles on one journal would overwrite each other. */
	#hold(folder: string): void {
		const [pid, ticks] = existsSync(this.#holder)
			? readFileSync(this.#holder, 'utf8').split(' ')
			: [];
		if (pid && Number(pid) !== process.pid && startTicks(Number(pid)) === ticks) {
			throw new Error(`Process ${pid} keeps its state in ${folder} already.`);
		}
		writeFileSync(this.#holder, `${process.pid} ${startTicks(process.pid)}`);
	}
}
