import { eq } from 'drizzle-orm';
import { addToTrail } from '../lib/server/audit/trail';
import { closePool } from '../lib/server/db/client';
import { user } from '../lib/server/db/schema';
import { inPlatform } from '../lib/server/db/transaction';

/**
 * Makes the account with the given address a platform admin, or takes that away with --revoke.
 * Needs the web server's environment: npm run platform-admin -- name@example.org
 */
const [email, flag] = process.argv.slice(2);
if (!email || (flag !== undefined && flag !== '--revoke')) {
	console.error('Usage: npm run platform-admin -- ADDRESS [--revoke]');
	process.exit(2);
}
const platformAdmin = flag !== '--revoke';
const changed = await inPlatform(
	{ actor: { kind: 'platform', userId: null, name: 'command line' } },
	async (tx) => {
		const [found] = await tx.sql
			.update(user)
			.set({ platformAdmin })
			.where(eq(user.email, email.trim().toLowerCase()))
			.returning({ id: user.id });
		if (found) {
			await addToTrail(tx, {
				action: platformAdmin ? 'platform.admin_made' : 'platform.admin_revoked',
				subject: { type: 'user', id: found.id }
			});
		}
		return found;
	}
);
await closePool();
if (!changed) {
	console.error(`No account has the address ${email}. Sign up first, then run this again.`);
	process.exit(1);
}
console.log(`${email} is ${platformAdmin ? 'now' : 'no longer'} a platform admin.`);
