import { closeSync, fstatSync, openSync, renameSync, writeSync, mkdirSync } from 'node:fs';
import path from 'node:path';

const LIMIT_BYTES = 5_000_000;
const TAIL_CHARACTERS = 6_000;

/** One service's log: appended, set aside once at five megabytes, with the last lines kept at hand. */
export class LogFile {
	readonly path: string;
	#fd: number;
	#size: number;
	#tail = '';

	constructor(folder: string, name: string) {
		mkdirSync(folder, { recursive: true, mode: 0o711 });
		this.path = path.join(folder, `${name}.log`);
		this.#fd = openSync(this.path, 'a', 0o600);
		this.#size = fstatSync(this.#fd).size;
	}

	/** Appends text as it came. */
	write(text: string): void {
		if (this.#fd < 0) return;
		if (this.#size > LIMIT_BYTES) this.#turnOver();
		this.#size += writeSync(this.#fd, text);
		this.#tail = (this.#tail + text).slice(-TAIL_CHARACTERS);
	}

	/** The last lines written by this run, for an error message. */
	tail(lines = 15): string {
		return this.#tail.trimEnd().split('\n').slice(-lines).join('\n');
	}

	close(): void {
		if (this.#fd >= 0) closeSync(this.#fd);
		this.#fd = -1;
	}

	#turnOver(): void {
		closeSync(this.#fd);
		renameSync(this.path, `${this.path}.1`);
		this.#fd = openSync(this.path, 'a', 0o600);
		this.#size = 0;
	}
}
