import { beforeAll, expect, test } from 'vitest';
import { readCatalog, type Table } from '../../support/catalog.ts';
import { adminQuery, withDatabase } from '../../support/database.ts';
import { SHARED_TABLES } from '../../support/shared-tables.ts';

let tables: Table[];
beforeAll(async () => {
	tables = await withDatabase('admin', readCatalog);
});

const names = (list: Table[]) => list.map((table) => table.name);

test('every table is isolated, or on the short list of those that hold no operator’s rows', () => {
	const open = tables.filter(
		(table) => !(table.rowSecurity && table.forced && table.policies.length > 0)
	);
	expect(names(open).sort()).toEqual(Object.keys(SHARED_TABLES).sort());
});

test('every isolated table names its operator, and no shared one does', () => {
	for (const table of tables) {
		const shared = table.name in SHARED_TABLES;
		expect(table.tenantColumn === undefined, `${table.name} has a column operator_id`).toBe(shared);
	}
});

test('every isolated table has a policy that ties reading and writing to the operator', async () => {
	const policies = await adminQuery<{ table: string; using: string; check: string | null }>(`
		select polrelid::regclass::text as table, pg_get_expr(polqual, polrelid) as using,
			pg_get_expr(polwithcheck, polrelid) as check
		from pg_policy where polcmd = '*'`);
	for (const table of tables.filter((one) => !(one.name in SHARED_TABLES))) {
		const tied = policies.filter(
			(policy) =>
				policy.table.replaceAll('"', '') === table.name &&
				policy.using.includes('app.operator_id') &&
				// Without a check of its own, PostgreSQL uses the first expression for writing too.
				(policy.check ?? policy.using).includes('app.operator_id')
		);
		expect(tied.length, `${table.name} has no such policy`).toBeGreaterThan(0);
	}
});

test('a reference from one operator’s row to another row always carries the operator along', () => {
	const isolated = new Set(names(tables.filter((table) => table.tenantColumn)));
	for (const table of tables) {
		for (const key of table.foreignKeys) {
			if (!table.tenantColumn || !isolated.has(key.target)) continue;
			const target = key.target === 'operator' ? 'id' : 'operator_id';
			const paired = key.columns.some(
				(column, i) => column === 'operator_id' && key.targetColumns[i] === target
			);
			expect(paired, `${table.name}.${key.name} could point into another tenant`).toBe(true);
		}
	}
});

test('tables belong to the owner, who is neither the application nor a superuser', async () => {
	for (const table of tables) expect(table.owner, table.name).toBe('bowkeeper_owner');
	const roles = await adminQuery(`
		select rolname, rolsuper, rolbypassrls, rolcreaterole, rolcreatedb, rolreplication
		from pg_roles where rolname like 'bowkeeper%' order by rolname`);
	expect(roles).toHaveLength(3);
	for (const role of roles) {
		expect(role).toMatchObject({
			rolsuper: false,
			rolbypassrls: false,
			rolcreaterole: false,
			rolcreatedb: false,
			rolreplication: false
		});
	}
	const memberships = await adminQuery(
		`select 1 from pg_auth_members where member in (select oid from pg_roles where rolname like 'bowkeeper%')`
	);
	expect(memberships).toEqual([]);
});

test('the application’s role owns nothing anywhere', async () => {
	const owned = await adminQuery(`
		select 'relation ' || c.oid::regclass as what from pg_class c
			where pg_get_userbyid(c.relowner) = 'bowkeeper_app'
		union all select 'function ' || p.oid::regprocedure from pg_proc p
			where pg_get_userbyid(p.proowner) = 'bowkeeper_app'
		union all select 'schema ' || nspname from pg_namespace
			where pg_get_userbyid(nspowner) = 'bowkeeper_app'
		union all select 'database ' || datname from pg_database
			where pg_get_userbyid(datdba) = 'bowkeeper_app'`);
	expect(owned).toEqual([]);
});

test('the application’s role has no way into the queue’s tables but the functions made for it', async () => {
	const reach = await adminQuery(`
		select c.oid::regclass::text as table from pg_class c
		join pg_namespace n on n.oid = c.relnamespace
		where n.nspname = 'graphile_worker' and c.relkind in ('r', 'p', 'v')
			and has_schema_privilege('bowkeeper_app', n.oid, 'usage')`);
	expect(reach).toEqual([]);
});

test('functions that run with their owner’s rights are the queue’s doors alone, with a fixed path', async () => {
	const functions = await adminQuery<{ schema: string; name: string; config: string[] | null }>(`
		select n.nspname as schema, p.proname as name, p.proconfig as config
		from pg_proc p join pg_namespace n on n.oid = p.pronamespace
		where p.prosecdef and n.nspname not in ('pg_catalog', 'information_schema', 'graphile_worker')
		order by 1, 2`);
	expect(functions.map(({ schema, name }) => `${schema}.${name}`)).toEqual([
		'queue.add_job',
		'queue.health',
		'queue.list_jobs',
		'queue.retry_job'
	]);
	for (const { config, name } of functions) {
		expect(config?.join(), name).toContain('search_path=pg_catalog, pg_temp');
	}
});

test('a view would be read with the rights of whoever reads it', async () => {
	const views = await adminQuery(`
		select c.oid::regclass::text as view from pg_class c
		where c.relnamespace = 'public'::regnamespace and (c.relkind = 'm' or c.relkind = 'v'
			and not coalesce(c.reloptions @> array['security_invoker=true'], false))`);
	expect(views).toEqual([]);
});
