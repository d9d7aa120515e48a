import { Refusal } from '../../src/lib/server/failures.ts';

/** The Refusal that a service answers with; fails when it lets the act through. */
export async function refusalOf(work: Promise<unknown>): Promise<Refusal> {
	try {
		await work;
	} catch (error) {
		if (error instanceof Refusal) return error;
		throw error;
	}
	throw new Error('It was not refused.');
}
