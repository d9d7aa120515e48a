import pg from 'pg';
import type { Secrets } from '../lib/secrets.ts';

export const DATABASE = 'bowkeeper';

/**
 * Makes the three roles and the database, or sets them right again.
 *
 * - `bowkeeper_owner` owns the database and its tables, and runs migrations.
 * - `bowkeeper_app` serves web and worker: owns nothing, never bypasses row-level security.
 * - `bowkeeper_queue` may make and own the queue's schemas, nothing else.
 */
export async function ensureRoles(adminUrl: string, secrets: Secrets): Promise<void> {
	const client = new pg.Client({ connectionString: adminUrl });
	await client.connect();
	try {
		const roles: [string, string][] = [
			['bowkeeper_owner', secrets.ownerPassword],
			['bowkeeper_app', secrets.appPassword],
			['bowkeeper_queue', secrets.queuePassword]
		];
		for (const [role, password] of roles) {
			const known = await client.query('select 1 from pg_roles where rolname = $1', [role]);
			if (known.rowCount === 0) await client.query(`create role ${role}`);
			await client.query(
				`alter role ${role} with login nosuperuser nocreatedb nocreaterole nobypassrls ` +
					`password ${client.escapeLiteral(password)}`
			);
		}
		const made = await client.query('select 1 from pg_database where datname = $1', [DATABASE]);
		if (made.rowCount === 0) {
			await client.query(`create database ${DATABASE} owner bowkeeper_owner`);
		}
		await client.query(`revoke all on database ${DATABASE} from public`);
		await client.query(`grant connect on database ${DATABASE} to bowkeeper_app`);
		await client.query(`grant connect, create on database ${DATABASE} to bowkeeper_queue`);
	} finally {
		await client.end();
	}
}
