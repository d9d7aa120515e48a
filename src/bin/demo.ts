import { eq } from 'drizzle-orm';
import { chmod, writeFile } from 'node:fs/promises';
import { closePool } from '../lib/server/db/client';
import { user } from '../lib/server/db/schema';
import { inPublic } from '../lib/server/db/transaction';
import { makeDemo } from '../lib/server/demo/make';

/** Fills an empty database with the demo, once; DEMO_FILE gets the sign-ins. */
const file = process.env.DEMO_FILE;
if (!file) {
	console.error('DEMO_FILE must name the file for the sign-ins.');
	process.exit(2);
}
const nobody = { actor: { kind: 'platform', userId: null, name: 'demo' } } as const;
const isEmpty = await inPublic(nobody, async (tx) => (await tx.sql.$count(user)) === 0);
if (isEmpty) {
	const { signIns, owner } = await makeDemo(new Date());
	// The demo's owner also sees the platform pages, so that they can be looked at.
	await inPublic(nobody, (tx) =>
		tx.sql.update(user).set({ platformAdmin: true }).where(eq(user.id, owner.userId))
	);
	await writeFile(file, JSON.stringify(signIns, null, '\t'), { mode: 0o600 });
	await chmod(file, 0o600);
	console.log('demo made');
} else {
	console.log('the database is in use: no demo made');
}
await closePool();
