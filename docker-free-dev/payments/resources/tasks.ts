import { newId } from '../ids.ts';
import type { Call } from '../call.ts';
import type { Task } from '../store.ts';

/** Notes something to be done later, also after a restart. */
export function schedule(
	call: Call,
	what: Task['what'],
	subject: string,
	dueAtMs: number = call.nowMs + call.laterMs
): void {
	call.tx.put('task', call.owner, newId('task'), { what, subject, dueAtMs });
}
