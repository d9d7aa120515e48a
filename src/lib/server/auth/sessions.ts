import { and, desc, eq, gt, lt, ne, sql } from 'drizzle-orm';
import type { Cookie, Session, User } from 'lucia';
import { session } from '../db/schema';
import { inPublic, type PlainTx } from '../db/transaction';
import { luciaIn } from './lucia';
import { hashToken } from './tokens';

const nobody = { actor: { kind: 'visitor', name: 'nobody yet' } } as const;

export interface CurrentSession {
	user: User;
	session: Session;
	/** A cookie to send when the session was lengthened. */
	renewedCookie: Cookie | null;
}

/** Who the cookie's session belongs to; null when it is unknown or over. */
export function readSession(sessionId: string): Promise<CurrentSession | null> {
	return inPublic(nobody, async (tx) => {
		const lucia = luciaIn(tx);
		const found = await lucia.validateSession(sessionId);
		if (!found.session) return null;
		if (Date.now() - found.session.lastSeenAt.getTime() > 5 * 60_000) {
			await tx.sql
				.update(session)
				.set({ lastSeenAt: new Date() })
				.where(eq(session.id, hashToken(sessionId)));
		}
		return {
			user: found.user,
			session: found.session,
			renewedCookie: found.session.fresh ? lucia.createSessionCookie(sessionId) : null
		};
	});
}

export interface NewSession {
	userId: string;
	userAgent: string;
	secondStepPassed: boolean;
	/** The session that this one takes the place of: it ends, so that an id never outlives a rise in rights. */
	replaces?: string | undefined;
}

/** Opens a session and returns its cookie. */
export async function openSession(tx: PlainTx, wanted: NewSession): Promise<Cookie> {
	const lucia = luciaIn(tx);
	if (wanted.replaces) await lucia.invalidateSession(wanted.replaces);
	const now = new Date();
	const opened = await lucia.createSession(wanted.userId, {
		secondStepPassed: wanted.secondStepPassed,
		userAgent: wanted.userAgent.slice(0, 300),
		createdAt: now,
		lastSeenAt: now
	});
	return lucia.createSessionCookie(opened.id);
}

/** Ends a session and returns the cookie that clears the browser's. */
export async function endSession(tx: PlainTx, sessionId: string): Promise<Cookie> {
	const lucia = luciaIn(tx);
	await lucia.invalidateSession(sessionId);
	return lucia.createBlankSessionCookie();
}

export interface ListedSession {
	/** Hash of the session's id; good for ending it, useless for signing in. */
	hash: string;
	userAgent: string;
	createdAt: Date;
	lastSeenAt: Date;
	current: boolean;
}

/** A person's open sessions, the last seen first. */
export async function listSessions(
	tx: PlainTx,
	userId: string,
	currentSessionId: string
): Promise<ListedSession[]> {
	const rows = await tx.sql
		.select()
		.from(session)
		.where(and(eq(session.userId, userId), gt(session.expiresAt, sql`now()`)))
		.orderBy(desc(session.lastSeenAt));
	const currentHash = hashToken(currentSessionId);
	return rows.map((row) => ({
		hash: row.id,
		userAgent: row.userAgent,
		createdAt: row.createdAt,
		lastSeenAt: row.lastSeenAt,
		current: row.id === currentHash
	}));
}

/** Ends one of a person's sessions by its hash; nothing happens when it is not theirs. */
export async function endListedSession(tx: PlainTx, userId: string, hash: string): Promise<void> {
	await tx.sql.delete(session).where(and(eq(session.userId, userId), eq(session.id, hash)));
}

/** Ends all of a person's sessions, except one if given. */
export async function endAllSessions(
	tx: PlainTx,
	userId: string,
	exceptId?: string
): Promise<void> {
	await tx.sql
		.delete(session)
		.where(
			and(eq(session.userId, userId), exceptId ? ne(session.id, hashToken(exceptId)) : undefined)
		);
}

/** Deletes sessions that are over. */
export async function deleteExpiredSessions(tx: PlainTx): Promise<void> {
	await tx.sql.delete(session).where(lt(session.expiresAt, sql`now()`));
}
