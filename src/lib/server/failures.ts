/**
 * A refusal that the person in front of the screen should read: what is wrong, at which field, and
 * what to do. Services throw it; `http.ts` turns it into a status and a message. Everything else that
 * is thrown is a fault of ours.
 */
export class Refusal extends Error {
	override readonly name = 'Refusal';
	constructor(
		readonly kind: 'invalid' | 'forbidden' | 'not_found' | 'conflict' | 'too_many',
		message: string,
		readonly field?: string
	) {
		super(message);
	}

	/** The HTTP status that says the same. */
	get status(): 400 | 403 | 404 | 409 | 429 {
		return (
			{ invalid: 400, forbidden: 403, not_found: 404, conflict: 409, too_many: 429 } as const
		)[this.kind];
	}
}
