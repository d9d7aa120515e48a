import { DrizzlePostgreSQLAdapter } from '@lucia-auth/adapter-drizzle';
import { Lucia, TimeSpan, type Adapter } from 'lucia';
import { session, user } from '../db/schema';
import type { PlainTx } from '../db/transaction';
import { env } from '../env';
import { hashToken } from './tokens';

interface SessionAttributes {
	secondStepPassed: boolean;
	userAgent: string;
	createdAt: Date;
	lastSeenAt: Date;
}

interface UserAttributes {
	email: string;
	name: string;
	secondStepSince: Date | null;
	platformAdmin: boolean;
}

declare module 'lucia' {
	interface Register {
		Lucia: Lucia<SessionAttributes, UserAttributes>;
		UserId: string;
		DatabaseSessionAttributes: SessionAttributes;
		DatabaseUserAttributes: UserAttributes;
	}
}

/**
 * Keeps only the hash of a session id in the database, while Lucia and the cookie know the id itself.
 * Sessions that are listed carry the hash as their id.
 */
function hashedIds(inner: Adapter): Adapter {
	return {
		async getSessionAndUser(sessionId) {
			const [found, owner] = await inner.getSessionAndUser(hashToken(sessionId));
			return [found && { ...found, id: sessionId }, owner];
		},
		getUserSessions: (userId) => inner.getUserSessions(userId),
		setSession: (value) => inner.setSession({ ...value, id: hashToken(value.id) }),
		updateSessionExpiration: (sessionId, expiresAt) =>
			inner.updateSessionExpiration(hashToken(sessionId), expiresAt),
		deleteSession: (sessionId) => inner.deleteSession(hashToken(sessionId)),
		deleteUserSessions: (userId) => inner.deleteUserSessions(userId),
		deleteExpiredSessions: () => inner.deleteExpiredSessions()
	};
}

/** Lucia on the connection of a transaction, so that what it writes commits with the rest. */
export function luciaIn(tx: PlainTx) {
	return new Lucia<SessionAttributes, UserAttributes>(
		hashedIds(new DrizzlePostgreSQLAdapter(tx.sql, session, user)),
		{
			sessionExpiresIn: new TimeSpan(14, 'd'),
			sessionCookie: {
				name: 'bowkeeper_session',
				attributes: { sameSite: 'lax', path: '/', secure: env().ORIGIN.startsWith('https:') }
			},
			getSessionAttributes: (row) => ({
				secondStepPassed: row.secondStepPassed,
				userAgent: row.userAgent,
				createdAt: row.createdAt,
				lastSeenAt: row.lastSeenAt
			}),
			getUserAttributes: (row) => ({
				email: row.email,
				name: row.name,
				secondStepSince: row.secondStepSince,
				platformAdmin: row.platformAdmin
			})
		}
	);
}

/** Name of the session's cookie. */
export const sessionCookieName = 'bowkeeper_session';
