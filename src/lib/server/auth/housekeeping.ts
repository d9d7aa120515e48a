import { lt, sql } from 'drizzle-orm';
import { rateLimit, signUp, userToken } from '../db/schema';
import { inPublic } from '../db/transaction';
import { deleteExpiredSessions } from './sessions';

/** Deletes what has lapsed: sessions, links, sign-ups never confirmed, counters of attempts. */
export function deleteExpired(): Promise<void> {
	return inPublic({ actor: { kind: 'worker', name: 'housekeeping' } }, async (tx) => {
		await deleteExpiredSessions(tx);
		await tx.sql.delete(userToken).where(lt(userToken.expiresAt, sql`now() - interval '1 day'`));
		await tx.sql.delete(signUp).where(lt(signUp.expiresAt, sql`now()`));
		await tx.sql.delete(rateLimit).where(lt(rateLimit.expire, Date.now()));
	});
}
