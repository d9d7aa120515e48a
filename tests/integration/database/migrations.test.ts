import { spawnSync } from 'node:child_process';
import { readdirSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import type pg from 'pg';
import { v7 as uuidv7 } from 'uuid';
import { describe, expect, test } from 'vitest';
import { inProject } from '../../../docker-free-dev/lib/paths.ts';
import { readCatalog } from '../../support/catalog.ts';
import { withDatabase } from '../../support/database.ts';
import { RowFactory } from '../../support/rows.ts';
import {
	committedMigrations,
	migrateScratch,
	withMigrations,
	withScratchDatabase
} from '../../support/scratch-database.ts';

const FOLDER = inProject('drizzle');
const migrations = committedMigrations();

test('the schema in code and the committed migrations say the same', async () => {
	await withMigrations('all', async (folder) => {
		const filesIn = () => readdirSync(folder, { recursive: true, encoding: 'utf8' }).sort();
		const before = filesIn();
		const config = path.join(folder, 'config.mjs');
		writeFileSync(
			config,
			`import project from ${JSON.stringify(inProject('drizzle.config.ts'))};\n` +
				`export default { ...project, out: ${JSON.stringify(path.relative(inProject(), folder))} };\n`
		);
		const run = spawnSync(
			process.execPath,
			[inProject('node_modules/drizzle-kit/bin.cjs'), 'generate', `--config=${config}`],
			{ cwd: inProject(), encoding: 'utf8', stdio: ['ignore', 'pipe', 'pipe'] }
		);
		// Its exit code is 0 even when it fails: its words count, and what lies in the folder.
		expect(run.stdout + run.stderr).toContain('No schema changes, nothing to migrate');
		expect(filesIn()).toEqual([...before, 'config.mjs'].sort());
	});
});

test('every migration in the folder is in its journal, in order', () => {
	const files = readdirSync(FOLDER).filter((name) => name.endsWith('.sql'));
	expect(files.map((name) => name.replace('.sql', ''))).toEqual(migrations);
});

test('an empty database is migrated, by two at once, and migrating again changes nothing', async () => {
	await withScratchDatabase(async (name) => {
		await Promise.all([migrateScratch(name, FOLDER), migrateScratch(name, FOLDER)]);
		const look = () =>
			withDatabase(
				'admin',
				async (client) => [await readCatalog(client), await applied(client)],
				name
			);
		const first = await look();
		await migrateScratch(name, FOLDER);
		expect(await look()).toEqual(first);
		expect(first[1]).toHaveLength(migrations.length);
		const here = await withDatabase('admin', readCatalog);
		expect(first[0]).toEqual(here);
	});
});

describe.each(migrations.slice(0, -1).map((tag, i) => ({ tag, count: i + 1 })))(
	'from the state of $tag',
	({ count }) => {
		test('a database with rows in every table is migrated and loses none of them', async () => {
			await withScratchDatabase((name) =>
				withMigrations(count, async (older) => {
					await migrateScratch(name, older);
					await withDatabase(
						'admin',
						async (client) => {
							const factory = await RowFactory.over(client);
							const operators = [uuidv7(), uuidv7()];
							for (const table of factory.tables) {
								for (const operatorId of operators) await factory.make(table.name, operatorId);
							}
							const before = await contents(client);
							await migrateScratch(name, FOLDER);
							expect(await applied(client)).toHaveLength(migrations.length);
							await expectKept(client, before);
						},
						name
					);
				})
			);
		});
	}
);

async function applied(client: pg.Client): Promise<string[]> {
	const { rows } = await client.query<{ hash: string }>(
		'select hash from drizzle.__drizzle_migrations order by created_at'
	);
	return rows.map(({ hash }) => hash);
}

type Contents = Map<string, Record<string, unknown>[]>;

async function contents(client: pg.Client): Promise<Contents> {
	const all: Contents = new Map();
	for (const { name } of await readCatalog(client)) {
		const { rows } = await client.query<{ row: Record<string, unknown> }>(
			`select to_json(t) as row from public."${name}" t order by t::text`
		);
		all.set(
			name,
			rows.map(({ row }) => row)
		);
	}
	return all;
}

/** Every row of before is still there, with what it held in the columns that are still there. */
async function expectKept(client: pg.Client, before: Contents): Promise<void> {
	const after = await contents(client);
	for (const [name, rows] of before) {
		expect(rows.length, name).toBeGreaterThan(0);
		const now = after.get(name) ?? [];
		expect(now, name).toHaveLength(rows.length);
		const columns = Object.keys(now[0] ?? {});
		for (const row of rows) {
			const kept = Object.fromEntries(Object.entries(row).filter(([key]) => columns.includes(key)));
			expect(now, name).toContainEqual(expect.objectContaining(kept));
		}
	}
}
