import { and, eq, gt, isNull, sql } from 'drizzle-orm';
import type { Cookie } from 'lucia';
import { addToTrail } from '../audit/trail';
import { user, userToken } from '../db/schema';
import { violates } from '../db/errors';
import { inPerson, inPublic, type PlainTx } from '../db/transaction';
import { env } from '../env';
import { Refusal } from '../failures';
import { writeLetter } from '../mail/outbox';
import { countAttempt, forgetAttempts } from './limits';
import { hashPassword, passwordFits } from './passwords';
import { endAllSessions, openSession } from './sessions';
import { hashToken, newToken } from './tokens';

const stranger = { kind: 'visitor', name: 'nobody yet' } as const;
const lapsedLink = 'This link was used or has lapsed. Ask for a new one.';

/**
 * Makes an account whose address is known to be its holder's.
 * @returns the person, or null when the address has an account already
 */
export async function openAccount(
	tx: PlainTx,
	account: { email: string; name: string; passwordHash: string }
): Promise<{ userId: string; name: string } | null> {
	const [made] = await tx.sql
		.insert(user)
		.values(account)
		.onConflictDoNothing({ target: user.email })
		.returning({ id: user.id, name: user.name });
	if (!made) return null;
	await addToTrail(tx, { action: 'account.opened', subject: { type: 'user', id: made.id } });
	return { userId: made.id, name: made.name };
}

/** Writes a letter with a link to set a new password, if the account exists; tells nothing. */
export async function requestNewPassword(
	email: string,
	request: { address: string; requestId: string }
): Promise<void> {
	await countAttempt('letterAddress', request.address);
	await countAttempt('letterAccount', email);
	await inPublic({ actor: stranger, requestId: request.requestId }, async (tx) => {
		const found = await tx.sql.query.user.findFirst({ where: eq(user.email, email) });
		if (!found) return;
		const { token, hash } = newToken();
		await tx.sql.insert(userToken).values({
			userId: found.id,
			purpose: 'password',
			tokenHash: hash,
			expiresAt: new Date(Date.now() + 3_600_000)
		});
		await writeLetter(tx, {
			kind: 'new_password',
			to: found.email,
			wipeWhenSent: true,
			content: {
				subject: 'Set a new password',
				greeting: `Hello ${found.name},`,
				paragraphs: [
					'Somebody, most likely you, asked for a new password. If it was not you, leave this letter: the old one stays.'
				],
				action: { label: 'Set a new password', url: `${env().ORIGIN}/forgotten/${token}` },
				note: 'The link holds for one hour and works once.',
				from: 'Bowkeeper'
			}
		});
	});
}

/** Whether a link from a letter still works. */
export function linkWorks(token: string, purpose: 'password' | 'address'): Promise<boolean> {
	return inPublic({ actor: stranger }, async (tx) => {
		const n = await tx.sql.$count(userToken, openToken(token, purpose));
		return n === 1;
	});
}

function openToken(token: string, purpose: 'password' | 'address') {
	return and(
		eq(userToken.tokenHash, hashToken(token)),
		eq(userToken.purpose, purpose),
		isNull(userToken.usedAt),
		gt(userToken.expiresAt, sql`now()`)
	);
}

async function useToken(tx: PlainTx, token: string, purpose: 'password' | 'address') {
	const [used] = await tx.sql
		.update(userToken)
		.set({ usedAt: new Date() })
		.where(openToken(token, purpose))
		.returning();
	if (!used) throw new Refusal('not_found', lapsedLink);
	return used;
}

/** Sets a new password through a link from a letter; every session ends. */
export async function setNewPassword(
	token: string,
	password: string,
	requestId: string
): Promise<void> {
	const passwordHash = await hashPassword(password);
	await inPublic({ actor: stranger, requestId }, async (tx) => {
		const { userId } = await useToken(tx, token, 'password');
		await tx.sql.update(user).set({ passwordHash }).where(eq(user.id, userId));
		// Other links for this password are of no more use.
		await tx.sql
			.update(userToken)
			.set({ usedAt: new Date() })
			.where(and(eq(userToken.userId, userId), isNull(userToken.usedAt)));
		await endAllSessions(tx, userId);
		await addToTrail(tx, {
			action: 'account.password_reset',
			subject: { type: 'user', id: userId }
		});
		await noticeOfChange(
			tx,
			userId,
			'Your password was changed',
			'through a link sent to this address'
		);
	});
}

async function noticeOfChange(tx: PlainTx, userId: string, subject: string, how: string) {
	const found = await tx.sql.query.user.findFirst({ where: eq(user.id, userId) });
	if (!found) return;
	await writeLetter(tx, {
		kind: 'account_changed',
		to: found.email,
		content: {
			subject,
			greeting: `Hello ${found.name},`,
			paragraphs: [
				`${subject} ${how}. If this was not you, set a new password at once and end all sessions.`
			],
			action: { label: 'Set a new password', url: `${env().ORIGIN}/forgotten` },
			from: 'Bowkeeper'
		}
	});
}

export interface SignedIn {
	userId: string;
	name: string;
	email: string;
	sessionId: string;
	secondStepPassed: boolean;
	userAgent: string;
	requestId: string;
}

function inOwnAccount<T>(person: SignedIn, run: (tx: PlainTx) => Promise<T>): Promise<T> {
	const actor = { kind: 'person', userId: person.userId, name: person.name } as const;
	return inPerson(person.userId, { actor, requestId: person.requestId }, run);
}

/** Checks the password of somebody who is signed in. @throws Refusal at field `current` */
export async function demandPassword(person: SignedIn, current: string): Promise<void> {
	// Counted first: a stolen session must not become a way to guess the password.
	const key = `confirm ${person.userId}`;
	await countAttempt('signInAccount', key);
	const found = await inOwnAccount(person, (tx) =>
		tx.sql.query.user.findFirst({ where: eq(user.id, person.userId) })
	);
	if (!(await passwordFits(found?.passwordHash ?? null, current))) {
		throw new Refusal('invalid', 'This is not your password.', 'current');
	}
	await forgetAttempts('signInAccount', key);
}

/** Changes the password: other sessions end and this one gets a new id. */
export async function changePassword(
	person: SignedIn,
	given: { current: string; password: string }
): Promise<Cookie> {
	await demandPassword(person, given.current);
	const passwordHash = await hashPassword(given.password);
	return inOwnAccount(person, async (tx) => {
		await tx.sql.update(user).set({ passwordHash }).where(eq(user.id, person.userId));
		await endAllSessions(tx, person.userId);
		await addToTrail(tx, {
			action: 'account.password_changed',
			subject: { type: 'user', id: person.userId }
		});
		await noticeOfChange(tx, person.userId, 'Your password was changed', 'on your account page');
		return openSession(tx, {
			userId: person.userId,
			userAgent: person.userAgent,
			secondStepPassed: person.secondStepPassed
		});
	});
}

/** Asks to move the account to another address: a link goes there, a notice to the present one. */
export async function requestNewAddress(
	person: SignedIn,
	given: { current: string; email: string }
): Promise<void> {
	await demandPassword(person, given.current);
	await countAttempt('letterAccount', given.email);
	await inOwnAccount(person, async (tx) => {
		const taken = await tx.sql.query.user.findFirst({ where: eq(user.email, given.email) });
		// Whether the new address has an account is for its holder to know: the answer is the same.
		if (taken) return;
		const { token, hash } = newToken();
		await tx.sql.insert(userToken).values({
			userId: person.userId,
			purpose: 'address',
			tokenHash: hash,
			newEmail: given.email,
			expiresAt: new Date(Date.now() + 24 * 3_600_000)
		});
		await writeLetter(tx, {
			kind: 'new_address',
			to: given.email,
			wipeWhenSent: true,
			content: {
				subject: 'Confirm your new address',
				greeting: `Hello ${person.name},`,
				paragraphs: ['Confirm that your Bowkeeper account should use this address from now on.'],
				action: { label: 'Use this address', url: `${env().ORIGIN}/address/${token}` },
				note: 'The link holds for 24 hours and works once.',
				from: 'Bowkeeper'
			}
		});
		await noticeOfChange(
			tx,
			person.userId,
			'A change of your address was asked for',
			'on your account page'
		);
	});
}

/** Moves the account to the address that the link was sent to. */
export async function confirmNewAddress(token: string, requestId: string): Promise<void> {
	try {
		await inPublic({ actor: stranger, requestId }, async (tx) => {
			const used = await useToken(tx, token, 'address');
			if (!used.newEmail) throw new Refusal('not_found', lapsedLink);
			await tx.sql.update(user).set({ email: used.newEmail }).where(eq(user.id, used.userId));
			await addToTrail(tx, {
				action: 'account.address_changed',
				subject: { type: 'user', id: used.userId }
			});
		});
	} catch (error) {
		if (violates(error, 'user_email_key')) throw new Refusal('conflict', lapsedLink);
		throw error;
	}
}
