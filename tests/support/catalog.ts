import type pg from 'pg';

export interface Column {
	name: string;
	/** The base type as PostgreSQL writes it: `uuid`, `text`, `timestamp with time zone`. */
	type: string;
	notNull: boolean;
	hasDefault: boolean;
	/** Values of an enum type, else empty. */
	labels: string[];
}

export interface ForeignKey {
	name: string;
	columns: string[];
	target: string;
	targetColumns: string[];
}

export interface Table {
	name: string;
	columns: Column[];
	foreignKeys: ForeignKey[];
	/** Definitions of its CHECK constraints. */
	checks: string[];
	owner: string;
	rowSecurity: boolean;
	forced: boolean;
	policies: string[];
	/** The column that names the operator of a row, for tables that hold tenants' rows. */
	tenantColumn: string | undefined;
}

/** Every table of the application's schema, as the database itself describes it. */
export async function readCatalog(client: pg.Client): Promise<Table[]> {
	const { rows } = await client.query<Table>(`
		select c.relname as name,
			pg_get_userbyid(c.relowner) as owner,
			c.relrowsecurity as "rowSecurity",
			c.relforcerowsecurity as forced,
			coalesce((select json_agg(json_build_object(
					'name', a.attname,
					'type', format_type(coalesce(nullif(t.typbasetype, 0), a.atttypid), null),
					'notNull', a.attnotnull,
					'hasDefault', a.atthasdef or a.attidentity <> '' or a.attgenerated <> '',
					'labels', coalesce((select json_agg(e.enumlabel order by e.enumsortorder)
						from pg_enum e where e.enumtypid = a.atttypid), '[]')
				) order by a.attnum)
				from pg_attribute a join pg_type t on t.oid = a.atttypid
				where a.attrelid = c.oid and a.attnum > 0 and not a.attisdropped), '[]') as columns,
			coalesce((select json_agg(json_build_object(
					'name', k.conname,
					'columns', (select json_agg(a.attname order by x.n)
						from unnest(k.conkey) with ordinality x(num, n)
						join pg_attribute a on a.attrelid = k.conrelid and a.attnum = x.num),
					'target', (select relname from pg_class where oid = k.confrelid),
					'targetColumns', (select json_agg(a.attname order by x.n)
						from unnest(k.confkey) with ordinality x(num, n)
						join pg_attribute a on a.attrelid = k.confrelid and a.attnum = x.num)
				) order by cardinality(k.conkey) desc, k.conname)
				from pg_constraint k where k.conrelid = c.oid and k.contype = 'f'), '[]')
				as "foreignKeys",
			coalesce((select json_agg(pg_get_constraintdef(k.oid) order by k.conname)
				from pg_constraint k where k.conrelid = c.oid and k.contype = 'c'), '[]') as checks,
			coalesce((select json_agg(p.polname order by p.polname)
				from pg_policy p where p.polrelid = c.oid), '[]') as policies
		from pg_class c
		where c.relnamespace = 'public'::regnamespace and c.relkind in ('r', 'p')
		order by c.relname`);
	return rows.map((table) => ({ ...table, tenantColumn: tenantColumnOf(table) }));
}

function tenantColumnOf({ name, columns }: Table): string | undefined {
	// The tenant itself is a row of `operator`.
	if (name === 'operator') return 'id';
	return columns.some((column) => column.name === 'operator_id') ? 'operator_id' : undefined;
}
