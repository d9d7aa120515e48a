import pg from 'pg';
import { v7 as uuidv7 } from 'uuid';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { withDatabase, refusalCode, databaseUrl } from '../../support/database.ts';
import type { Table } from '../../support/catalog.ts';
import { RowFactory, type Row } from '../../support/rows.ts';

/**
 * Two operators, each with a row in every table of the catalog; everything here is tried as the first
 * against the rows of the second. A new table is covered the day it is migrated.
 */
const ours = uuidv7();
const theirs = uuidv7();

/** How a refusal reads: no right to do it, row-level security, or a promise's own trigger before both. */
const REFUSED = /^(42501|BK\d{3})$/;

let admin: pg.Client;
let app: pg.Client;
let factory: RowFactory;
let tenantTables: Table[];

beforeAll(async () => {
	admin = new pg.Client({ connectionString: databaseUrl('admin') });
	app = new pg.Client({ connectionString: databaseUrl('app') });
	await Promise.all([admin.connect(), app.connect()]);
	factory = await RowFactory.over(admin);
	tenantTables = factory.tables.filter((table) => table.tenantColumn);
	for (const table of tenantTables) {
		await factory.make(table.name, ours);
		await factory.make(table.name, theirs);
	}
});
afterAll(() => Promise.all([admin.end(), app.end()]));

/** Runs in a transaction that is rolled back, with the settings of a kind of transaction. */
async function as<T>(settings: Record<string, string>, run: () => Promise<T>): Promise<T> {
	await app.query('begin');
	try {
		for (const [name, value] of Object.entries(settings)) {
			await app.query('select set_config($1, $2, true)', [`app.${name}`, value]);
		}
		return await run();
	} finally {
		await app.query('rollback');
	}
}

const asUs = <T>(run: () => Promise<T>) => as({ operator_id: ours }, run);
const quoted = (table: Table) => `public.${pg.escapeIdentifier(table.name)}`;
const column = (table: Table) => pg.escapeIdentifier(table.tenantColumn ?? '');

async function theirRows(table: Table): Promise<string[]> {
	const { rows } = await admin.query<{ row: string }>(
		`select t::text as row from ${quoted(table)} t where ${column(table)} = $1 order by 1`,
		[theirs]
	);
	return rows.map(({ row }) => row);
}

/** Runs `attempt` for each table and says which tables let it through. */
async function everyTable(attempt: (table: Table) => Promise<void>): Promise<void> {
	for (const table of tenantTables) {
		const before = await theirRows(table);
		expect(before, table.name).not.toEqual([]);
		await attempt(table);
		expect(await theirRows(table), table.name).toEqual(before);
	}
}

test('the catalog has tables to try', () => {
	expect(tenantTables.map((table) => table.name)).toEqual(
		expect.arrayContaining(['operator', 'member', 'invitation', 'letter', 'trail'])
	);
});

test('another operator’s rows can not be read, and one’s own can', async () => {
	await everyTable((table) =>
		asUs(async () => {
			const { rows } = await app.query<{ operator: string }>(
				`select ${column(table)} as operator from ${quoted(table)}`
			);
			const seen = new Set(rows.map((row) => row.operator));
			expect([...seen], table.name).toEqual([ours]);
		})
	);
});

test('without an operator, nobody’s rows can be read', async () => {
	for (const table of tenantTables) {
		const { rows } = await as({}, () =>
			app.query(`select 1 from ${quoted(table)} where ${column(table)} is not null`)
		);
		expect(rows, table.name).toEqual([]);
	}
});

test('a person with no role at an operator, and the platform, see nothing inside of it', async () => {
	const stranger = await factory.make('user', ours);
	for (const table of tenantTables) {
		const read = () =>
			app.query(`select 1 from ${quoted(table)} where ${column(table)} = $1`, [theirs]);
		const byPerson = await as({ user_id: String(stranger.id) }, read);
		expect(byPerson.rows, table.name).toEqual([]);
		const byPlatform = await as({ platform: 'on' }, read);
		// The platform lists and suspends operators; that one row is theirs to see.
		expect(byPlatform.rows, table.name).toHaveLength(table.name === 'operator' ? 1 : 0);
	}
});

test('no row can be added for another operator', async () => {
	await everyTable(async (table) => {
		const copy: Row = { ...(await factory.make(table.name, theirs)) };
		if (table.name !== 'operator' && 'id' in copy) copy.id = uuidv7();
		const names = Object.keys(copy).map((name) => pg.escapeIdentifier(name));
		const code = await asUs(() =>
			refusalCode(
				app.query(
					`insert into ${quoted(table)} (${names.join(', ')})
					 select ${names.join(', ')} from json_populate_record(null::${quoted(table)}, $1)`,
					[JSON.stringify(copy)]
				)
			)
		);
		expect(code, table.name).toMatch(REFUSED);
	});
});

test('another operator’s rows can be neither changed nor deleted', async () => {
	await everyTable(async (table) => {
		const where = `where ${column(table)} = '${theirs}'`;
		for (const statement of [
			`update ${quoted(table)} set ${column(table)} = ${column(table)} ${where}`,
			`delete from ${quoted(table)} ${where}`
		]) {
			await asUs(async () => {
				const outcome = await app.query(statement).then(
					(result) => result.rowCount,
					(error: { code?: string }) => error.code
				);
				// Nothing found, or no right to do it to any row at all.
				expect([0, '42501'], `${table.name}: ${statement}`).toContain(outcome);
			});
		}
	});
});

test('one’s own row can not be handed to another operator', async () => {
	await everyTable(async (table) => {
		const code = await asUs(() =>
			refusalCode(app.query(`update ${quoted(table)} set ${column(table)} = '${theirs}'`))
		);
		expect(code, table.name).toMatch(REFUSED);
	});
});

test('no table can be emptied or altered by the application', async () => {
	for (const table of factory.tables) {
		const empty = asUs(() => refusalCode(app.query(`truncate ${quoted(table)} cascade`)));
		expect(await empty, table.name).toBe('42501');
		const open = `alter table ${quoted(table)} disable row level security`;
		expect(await asUs(() => refusalCode(app.query(open))), table.name).toBe('42501');
	}
});

test('nothing of a transaction’s operator stays on the connection', async () => {
	await withDatabase('app', async (client) => {
		await client.query(`begin; select set_config('app.operator_id', '${ours}', true); commit`);
		const { rows } = await client.query('select 1 from member');
		expect(rows).toEqual([]);
	});
});
