import { sql } from 'drizzle-orm';
import { drizzle } from 'drizzle-orm/node-postgres';
import { migrate as drizzleMigrate } from 'drizzle-orm/node-postgres/migrator';
import { runMigrations } from 'graphile-worker';
import pg from 'pg';
import { queueSql } from '../jobs/queue-sql';

/** Only one migration runs at a time; any number that only this lock uses. */
const migrationLock = 7_240_300;

export interface MigrateOptions {
	ownerUrl: string;
	queueUrl: string;
	/** Folder with the migrations. */
	folder: string;
}

/** Brings the database to the newest state: the queue's tables, then ours. May be repeated. */
export async function migrate({ ownerUrl, queueUrl, folder }: MigrateOptions): Promise<void> {
	const owner = new pg.Client({
		connectionString: ownerUrl,
		application_name: 'bowkeeper migrate'
	});
	await owner.connect();
	try {
		const db = drizzle(owner);
		await db.execute(sql`select pg_advisory_lock(${migrationLock})`);
		await runMigrations({ connectionString: queueUrl });
		const queue = new pg.Client({ connectionString: queueUrl });
		await queue.connect();
		try {
			await queue.query(queueSql);
		} finally {
			await queue.end();
		}
		await drizzleMigrate(db, { migrationsFolder: folder });
	} finally {
		await owner.end();
	}
}
