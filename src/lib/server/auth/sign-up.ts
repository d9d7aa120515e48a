import { and, eq, gt, sql } from 'drizzle-orm';
import type { Cookie } from 'lucia';
import { signUp, user } from '../db/schema';
import { inPublic } from '../db/transaction';
import { env } from '../env';
import { Refusal } from '../failures';
import { writeLetter } from '../mail/outbox';
import { openOperator } from '../operators/operators';
import { openAccount } from './account';
import { countAttempt } from './limits';
import { hashPassword } from './passwords';
import { openSession } from './sessions';
import { hashToken, newToken } from './tokens';

const stranger = { kind: 'visitor', name: 'nobody yet' } as const;
const hoursValid = 24;

/**
 * Takes a sign-up and writes a letter with a link to confirm the address. Where the address already
 * has an account the letter says so instead; the caller learns nothing either way.
 * @throws Refusal when too many letters were asked for
 */
export async function requestSignUp(
	wanted: { email: string; name: string; operatorName: string; password: string },
	request: { address: string; requestId: string }
): Promise<void> {
	await countAttempt('letterAddress', request.address);
	await countAttempt('letterAccount', wanted.email);
	const passwordHash = await hashPassword(wanted.password);
	await inPublic({ actor: stranger, requestId: request.requestId }, async (tx) => {
		const present = await tx.sql.query.user.findFirst({ where: eq(user.email, wanted.email) });
		if (present) {
			await writeLetter(tx, {
				kind: 'sign_up_known',
				to: wanted.email,
				content: {
					subject: 'You already have a Bowkeeper account',
					greeting: `Hello ${present.name},`,
					paragraphs: [
						'Somebody, most likely you, asked to open an account with this address. There is one already, so nothing was changed.',
						'Sign in with it; if the password is lost, ask for a new one there. You can open a further operator once you are signed in.'
					],
					action: { label: 'Sign in', url: `${env().ORIGIN}/sign-in` },
					from: 'Bowkeeper'
				}
			});
			return;
		}
		const { token, hash } = newToken();
		await tx.sql.insert(signUp).values({
			email: wanted.email,
			name: wanted.name,
			operatorName: wanted.operatorName,
			passwordHash,
			tokenHash: hash,
			expiresAt: new Date(Date.now() + hoursValid * 3_600_000)
		});
		await writeLetter(tx, {
			kind: 'sign_up',
			to: wanted.email,
			wipeWhenSent: true,
			content: {
				subject: 'Confirm your address for Bowkeeper',
				greeting: `Hello ${wanted.name},`,
				paragraphs: [
					`Confirm this address to open ${wanted.operatorName} at Bowkeeper. If you did not ask for it, leave this letter: nothing was opened.`
				],
				action: { label: 'Confirm the address', url: `${env().ORIGIN}/sign-up/confirm/${token}` },
				note: `The link holds for ${hoursValid} hours and works once.`,
				from: 'Bowkeeper'
			}
		});
	});
}

/** The sign-up behind a link, for the page that asks to confirm; null when it lapsed or was used. */
export function findSignUp(token: string) {
	return inPublic({ actor: stranger }, async (tx) => {
		const found = await tx.sql.query.signUp.findFirst({
			columns: { email: true, operatorName: true },
			where: and(eq(signUp.tokenHash, hashToken(token)), gt(signUp.expiresAt, sql`now()`))
		});
		return found ?? null;
	});
}

/**
 * Confirms a sign-up: makes the person, their operator and a session.
 * @throws Refusal when the link lapsed or was used
 */
export async function confirmSignUp(
	token: string,
	request: { userAgent: string; requestId: string }
): Promise<{ cookie: Cookie; slug: string }> {
	const lapsed = new Refusal(
		'not_found',
		'This link was used or has lapsed. Sign in, or sign up again for a new one.'
	);
	const made = await inPublic({ actor: stranger, requestId: request.requestId }, async (tx) => {
		const [wanted] = await tx.sql
			.delete(signUp)
			.where(and(eq(signUp.tokenHash, hashToken(token)), gt(signUp.expiresAt, sql`now()`)))
			.returning();
		if (!wanted) throw lapsed;
		const { email, name, passwordHash, operatorName } = wanted;
		const person = await openAccount(tx, { email, name, passwordHash });
		// The same address was confirmed through another link meanwhile.
		if (!person) throw lapsed;
		const cookie = await openSession(tx, {
			userId: person.userId,
			userAgent: request.userAgent,
			secondStepPassed: false
		});
		return { cookie, person, operatorName };
	});
	// A second transaction, because the operator's rows exist only inside its own. Should it fail,
	// the person is signed in without an operator and opens one from the page that is shown then.
	const opened = await openOperator(made.person, made.operatorName, request.requestId);
	return { cookie: made.cookie, slug: opened.slug };
}
