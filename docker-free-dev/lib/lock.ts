import { linkSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { startTicks } from './processes.ts';
import { delay } from './wait.ts';

interface Holder {
	pid: number;
	ticks: string | undefined;
	guardian: number;
	guardianTicks: string | undefined;
	what: string;
}

/** Thrown when another start of this checkout is running. */
export class Locked extends Error {}

/**
 * Takes the checkout's lock. When the holder was killed its guardian may still be ending its services:
 * that is waited for.
 * @throws Locked when another run holds it.
 */
export async function takeLock(file: string, what: string, guardian: number): Promise<() => void> {
	const until = Date.now() + 15_000;
	for (;;) {
		const holder = readHolder(file);
		if (!holder) {
			if (create(file, what, guardian)) return () => rmSync(file, { force: true });
			continue;
		}
		if (isRunning(holder.pid, holder.ticks)) throw new Locked(sayHeld(holder));
		if (isRunning(holder.guardian, holder.guardianTicks) && Date.now() < until) await delay(100);
		else rmSync(file, { force: true });
	}
}

/** Who holds the lock now, in words; undefined when nobody does. */
export function lockedBy(file: string): string | undefined {
	const holder = readHolder(file);
	if (!holder) return undefined;
	const held =
		isRunning(holder.pid, holder.ticks) || isRunning(holder.guardian, holder.guardianTicks);
	return held ? sayHeld(holder) : undefined;
}

function sayHeld(holder: Holder): string {
	return `npm ${holder.what} is already running in this folder (process ${holder.pid}).`;
}

function isRunning(pid: number, ticks: string | undefined): boolean {
	const now = startTicks(pid);
	return now !== undefined && now === ticks;
}

function create(file: string, what: string, guardian: number): boolean {
	const holder: Holder = {
		pid: process.pid,
		ticks: startTicks(process.pid),
		guardian,
		guardianTicks: startTicks(guardian),
		what
	};
	// Written aside and linked, so that nobody ever reads half a lock.
	const aside = `${file}.${process.pid}`;
	writeFileSync(aside, JSON.stringify(holder));
	try {
		linkSync(aside, file);
		return true;
	} catch {
		return false;
	} finally {
		rmSync(aside, { force: true });
	}
}

function readHolder(file: string): Holder | undefined {
	try {
		return JSON.parse(readFileSync(file, 'utf8')) as Holder;
	} catch {
		return undefined;
	}
}
