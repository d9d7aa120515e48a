import pg from 'pg';

/** The four ways into the database of a test run, by the variable that names each. */
const VARIABLES = {
	/** The superuser: sees every row. */
	admin: 'TEST_ADMIN_DATABASE_URL',
	/** Owns the tables, and stays under row-level security. */
	owner: 'DATABASE_OWNER_URL',
	/** The application's own role. */
	app: 'DATABASE_URL',
	queue: 'DATABASE_QUEUE_URL'
} as const;

export type DatabaseRole = keyof typeof VARIABLES;

/** The connection address of a role, in the run's own database or in another one of its cluster. */
export function databaseUrl(role: DatabaseRole, database?: string): string {
	const variable = VARIABLES[role];
	const value = process.env[variable];
	if (!value) throw new Error(`${variable} is not set: run this through the integration project.`);
	if (!database) return value;
	const url = new URL(value);
	url.pathname = `/${database}`;
	return url.href;
}

/** Opens a connection in a role for as long as `run` takes. */
export async function withDatabase<T>(
	role: DatabaseRole,
	run: (client: pg.Client) => Promise<T>,
	database?: string
): Promise<T> {
	const client = new pg.Client({ connectionString: databaseUrl(role, database) });
	await client.connect();
	try {
		return await run(client);
	} finally {
		await client.end();
	}
}

/** One statement as the superuser: what really lies in the database, whoever may see it. */
export async function adminQuery<Row extends pg.QueryResultRow>(
	text: string,
	values: unknown[] = []
): Promise<Row[]> {
	return withDatabase('admin', async (client) => (await client.query<Row>(text, values)).rows);
}

/** PostgreSQL's code for why a statement was refused; fails when it was not. */
export async function refusalCode(work: Promise<unknown>): Promise<string> {
	try {
		await work;
	} catch (error) {
		const code = codeOf(error);
		if (code) return code;
		throw error;
	}
	throw new Error('The database did not refuse it.');
}

function codeOf(error: unknown): string | undefined {
	for (let at: unknown = error; at instanceof Error; at = at.cause) {
		const { code } = at as { code?: unknown };
		if (typeof code === 'string') return code;
	}
	return undefined;
}
