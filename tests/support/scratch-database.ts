import { cpSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { inProject } from '../../docker-free-dev/lib/paths.ts';
import { migrate } from '../../src/lib/server/db/migrate.ts';
import { databaseUrl, withDatabase } from './database.ts';

/** Makes an empty database beside the run's own, with the same rights, for as long as `run` takes. */
export async function withScratchDatabase<T>(run: (name: string) => Promise<T>): Promise<T> {
	const name = `scratch_${crypto.randomUUID().replaceAll('-', '')}`;
	await withDatabase('admin', async (client) => {
		await client.query(`create database ${name} owner bowkeeper_owner`);
		await client.query(`revoke all on database ${name} from public`);
		await client.query(`grant connect on database ${name} to bowkeeper_app`);
		await client.query(`grant connect, create on database ${name} to bowkeeper_queue`);
	});
	try {
		return await run(name);
	} finally {
		await withDatabase('admin', (client) => client.query(`drop database ${name} with (force)`));
	}
}

/** Migrates a scratch database by the migrations in `folder`. */
export function migrateScratch(name: string, folder: string): Promise<void> {
	return migrate({
		ownerUrl: databaseUrl('owner', name),
		queueUrl: databaseUrl('queue', name),
		folder
	});
}

interface Journal {
	entries: { tag: string; when: number }[];
}

/** The committed migrations, in their order. */
export function committedMigrations(): string[] {
	const journal = readFileSync(inProject('drizzle/meta/_journal.json'), 'utf8');
	return (JSON.parse(journal) as Journal).entries.map((entry) => entry.tag);
}

/** A copy of the folder of migrations with the first `count` of them, or all. */
export async function withMigrations<T>(
	count: number | 'all',
	run: (folder: string) => Promise<T>
): Promise<T> {
	const folder = mkdtempSync(path.join(os.tmpdir(), 'bowkeeper-migrations-'));
	try {
		cpSync(inProject('drizzle'), folder, { recursive: true });
		if (count !== 'all') {
			const file = path.join(folder, 'meta/_journal.json');
			const journal = JSON.parse(readFileSync(file, 'utf8')) as Journal;
			journal.entries.length = count;
			writeFileSync(file, JSON.stringify(journal));
		}
		return await run(folder);
	} finally {
		rmSync(folder, { recursive: true, force: true });
	}
}
