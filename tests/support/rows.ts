import pg from 'pg';
import { v7 as uuidv7 } from 'uuid';
import { readCatalog, type Column, type ForeignKey, type Table } from './catalog.ts';
import { makers } from './row-makers.ts';

export type Row = Record<string, unknown>;

/** What a maker may need beyond the columns that it fills. */
export interface MakerNeeds {
	operatorId: string;
	/** The factory's row of another table for the same operator, made when there is none. */
	row: (table: string) => Promise<Row>;
	/** A word that no other row has. */
	word: () => string;
}

/** Fills what the catalog alone does not tell: values that checks and triggers ask for. */
export type Maker = (needs: MakerNeeds) => Row | Promise<Row>;

/**
 * Makes one row of each table for an operator, as the superuser, from what the catalog says: required
 * columns by their type, foreign keys by the rows that they point to. Where a check or a trigger wants
 * more, `row-makers.ts` says what.
 */
export class RowFactory {
	#client: pg.Client;
	#tables: Map<string, Table>;
	#made = new Map<string, Promise<Row>>();
	#words = 0;

	private constructor(client: pg.Client, tables: Table[]) {
		this.#client = client;
		this.#tables = new Map(tables.map((table) => [table.name, table]));
	}

	static async over(client: pg.Client): Promise<RowFactory> {
		return new RowFactory(client, await readCatalog(client));
	}

	get tables(): Table[] {
		return [...this.#tables.values()];
	}

	/**
	 * The operator's row of a table; the same one each time.
	 * @throws Error that names the table when no row could be made
	 */
	make(name: string, operatorId: string): Promise<Row> {
		const key = `${name} ${operatorId}`;
		const before = this.#made.get(key);
		if (before) return before;
		const making = this.#insert(name, operatorId);
		this.#made.set(key, making);
		return making;
	}

	async #insert(name: string, operatorId: string): Promise<Row> {
		const table = this.#tables.get(name);
		if (!table) throw new Error(`There is no table ${name}.`);
		const values = await this.#fill(table, operatorId);
		const names = Object.keys(values);
		const list = names.map((column) => pg.escapeIdentifier(column)).join(', ');
		const marks = names.map((_, i) => `$${i + 1}`).join(', ');
		try {
			const { rows } = await this.#client.query<Row>(
				`insert into public.${pg.escapeIdentifier(name)} (${list}) values (${marks}) returning *`,
				Object.values(values)
			);
			return rows[0] ?? {};
		} catch (error) {
			throw new Error(
				`No row of the table ${name} could be made: ${String(error)}. ` +
					`Add what it needs to tests/support/row-makers.ts.`,
				{ cause: error }
			);
		}
	}

	async #fill(table: Table, operatorId: string): Promise<Row> {
		const needs: MakerNeeds = {
			operatorId,
			row: (other) => this.make(other, operatorId),
			word: () => this.#word()
		};
		const values: Row = { ...(await makers[table.name]?.(needs)) };
		if (table.tenantColumn) values[table.tenantColumn] ??= operatorId;
		for (const key of table.foreignKeys) await this.#follow(table, key, values, operatorId);
		table.columns.forEach((column, position) => {
			if (column.name in values || !column.notNull || column.hasDefault) return;
			values[column.name] =
				onlyAllowed(table, column) ?? column.labels[0] ?? this.#invent(column, position);
		});
		return values;
	}

	/** Points a required foreign key at the operator's own row of the other table. */
	async #follow(table: Table, key: ForeignKey, values: Row, operatorId: string): Promise<void> {
		if (key.target === 'operator') await this.make('operator', operatorId);
		const missing = key.columns.filter((name) => !(name in values));
		if (missing.length === 0) return;
		const required = key.columns.every(
			(name) => name in values || table.columns.find((column) => column.name === name)?.notNull
		);
		if (!required || key.target === table.name) return;
		const parent = await this.make(key.target, operatorId);
		key.columns.forEach((name, i) => {
			values[name] ??= parent[key.targetColumns[i] ?? ''];
		});
	}

	/** A value of the column's type. Later columns get later values: an end comes after its start. */
	#invent(column: Column, position: number): unknown {
		const type = column.type;
		if (type === 'uuid') return uuidv7();
		if (type === 'boolean') return false;
		if (type === 'date') return '2027-05-01';
		if (type === 'bytea') return Buffer.from('bytes');
		if (type.endsWith('[]')) return '{}';
		if (type.startsWith('json')) return '{}';
		if (type.startsWith('timestamp')) {
			return new Date(Date.UTC(2027, 4, 1) + position * 600_000).toISOString();
		}
		if (type === 'tstzrange') return '[2027-05-01T08:00Z,2027-05-01T09:00Z)';
		if (/^(small|big)?int|^integer|^numeric|^double|^real/.test(type)) return 1;
		if (/^(text|character)/.test(type)) {
			return column.name.includes('currency') ? 'EUR' : this.#word();
		}
		throw new Error(`The row factory knows no value of type ${type} (column ${column.name}).`);
	}

	#word(): string {
		this.#words += 1;
		return `w${uuidv7().slice(-12)}${this.#words}`;
	}
}

/** The first value that a check of the form `column in (...)` allows. */
function onlyAllowed(table: Table, column: Column): string | undefined {
	for (const check of table.checks) {
		const list = /^CHECK \(\(\(?"?(\w+)"?\)?(?:::text)? = ANY \(\(?ARRAY\['([^']*)'/.exec(check);
		if (list?.[1] === column.name) return list[2];
	}
	return undefined;
}
