import { migrate } from '../lib/server/db/migrate';

/** Migrates the database named by DATABASE_OWNER_URL and DATABASE_QUEUE_URL. */
const { DATABASE_OWNER_URL: ownerUrl, DATABASE_QUEUE_URL: queueUrl } = process.env;
if (!ownerUrl || !queueUrl) {
	console.error('DATABASE_OWNER_URL and DATABASE_QUEUE_URL must be set.');
	process.exit(2);
}
await migrate({ ownerUrl, queueUrl, folder: 'drizzle' });
