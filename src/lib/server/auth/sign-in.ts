import { eq } from 'drizzle-orm';
import type { Cookie } from 'lucia';
import { addToTrail } from '../audit/trail';
import { user } from '../db/schema';
import { inPerson, inPublic } from '../db/transaction';
import { Refusal } from '../failures';
import { countAttempt, forgetAttempts, giveBackAttempt } from './limits';
import { passwordFits } from './passwords';
import { openSession } from './sessions';

export interface SignInAttempt {
	email: string;
	password: string;
	/** Where the request came from, for the limit by address. */
	address: string;
	userAgent: string;
	requestId: string;
	/** A session that the browser already holds; it ends. */
	presentSessionId?: string | undefined;
}

/**
 * Signs a person in.
 * @returns the session's cookie, and whether the second step must still be passed
 * @throws Refusal, the same whether or not the account exists
 */
export async function signIn(
	attempt: SignInAttempt
): Promise<{ cookie: Cookie; secondStepNeeded: boolean }> {
	await countAttempt('signInAddress', attempt.address);
	await countAttempt('signInAccount', attempt.email);

	const found = await inPublic({ actor: { kind: 'visitor', name: 'nobody yet' } }, (tx) =>
		tx.sql.query.user.findFirst({ where: eq(user.email, attempt.email) })
	);
	if (!(await passwordFits(found?.passwordHash ?? null, attempt.password)) || !found) {
		throw new Refusal('invalid', 'Address and password do not fit together.');
	}
	await giveBackAttempt('signInAddress', attempt.address);
	// With a second step, wrong attempts are forgotten only when that has been passed too.
	await (found.secondStepSince ? giveBackAttempt : forgetAttempts)('signInAccount', attempt.email);

	const actor = { kind: 'person', userId: found.id, name: found.name } as const;
	return inPerson(found.id, { actor, requestId: attempt.requestId }, async (tx) => {
		const cookie = await openSession(tx, {
			userId: found.id,
			userAgent: attempt.userAgent,
			secondStepPassed: false,
			replaces: attempt.presentSessionId
		});
		await addToTrail(tx, { action: 'account.signed_in', subject: { type: 'user', id: found.id } });
		return { cookie, secondStepNeeded: found.secondStepSince !== null };
	});
}
