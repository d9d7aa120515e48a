import { drizzle, type NodePgDatabase } from 'drizzle-orm/node-postgres';
import pg from 'pg';
import type { Role } from './schema/operators';
import { connect } from './client';
import * as schema from './schema';

export type Sql = NodePgDatabase<typeof schema>;

/** Who acts. Its kind and name stand in the trail; a member's role decides what it may do. */
export type Actor =
	| { kind: 'member'; userId: string; name: string; role: Role }
	| { kind: 'person'; userId: string; name: string }
	| { kind: 'platform'; userId: string | null; name: string }
	| { kind: 'visitor'; name: string }
	| { kind: 'worker'; name: string };

interface Transaction {
	readonly sql: Sql;
	readonly actor: Actor;
	readonly requestId: string | null;
}

/** A transaction in which only one operator's rows exist. Every tenant service takes it first. */
export interface TenantTx extends Transaction {
	readonly operatorId: string;
}

/** A transaction of a person or of the platform: no operator's rows but those its policies name. */
export interface PlainTx extends Transaction {
	readonly operatorId: null;
}

interface Settings {
	operatorId?: string;
	userId?: string;
	platform?: boolean;
	operatorSlug?: string;
	paymentAccount?: string;
}

function beginWith(settings: Settings): string {
	const values: [string, string][] = [
		['app.operator_id', settings.operatorId ?? ''],
		['app.user_id', settings.userId ?? ''],
		['app.platform', settings.platform ? 'on' : ''],
		['app.operator_slug', settings.operatorSlug ?? ''],
		['app.payment_account', settings.paymentAccount ?? '']
	];
	// One message: begin and settings travel together (the simple protocol takes no parameters).
	const list = values.map(
		([name, value]) => `set_config('${name}', ${pg.escapeLiteral(value)}, true)`
	);
	return `begin; select ${list.join(', ')}`;
}

/**
 * Opens a transaction with row-level security set for it and nothing else: all settings are
 * written each time, local to the transaction, so that pooled connections carry nothing over.
 */
async function open<T>(settings: Settings, run: (sql: Sql) => Promise<T>): Promise<T> {
	let broken: Error | undefined;
	// A connection that breaks in mid-transaction reports here as well as at the statement.
	const onError = (error: Error) => {
		broken = error;
	};
	const client = await connect(beginWith(settings), onError);
	broken = undefined;
	try {
		const result = await run(drizzle(client, { schema }));
		await client.query('commit');
		return result;
	} catch (error) {
		await client.query('rollback').catch((rollbackError: Error) => {
			broken = rollbackError;
		});
		throw error;
	} finally {
		client.off('error', onError);
		client.release(broken);
	}
}

export interface Origin {
	actor: Actor;
	requestId?: string | null;
}

/** The one way into an operator's rows. Rolls back when `run` throws. */
export function inTenant<T>(
	operatorId: string,
	{ actor, requestId = null }: Origin,
	run: (tx: TenantTx) => Promise<T>
): Promise<T> {
	return open({ operatorId }, (sql) => run({ sql, actor, requestId, operatorId }));
}

/** A transaction about a person's own account: their memberships and the operators of these. */
export function inPerson<T>(
	userId: string,
	{ actor, requestId = null }: Origin,
	run: (tx: PlainTx) => Promise<T>
): Promise<T> {
	return open({ userId }, (sql) => run({ sql, actor, requestId, operatorId: null }));
}

/** A transaction of the platform administration: all operators' own rows, nothing inside them. */
export function inPlatform<T>(
	{ actor, requestId = null }: Origin,
	run: (tx: PlainTx) => Promise<T>
): Promise<T> {
	return open({ platform: true }, (sql) => run({ sql, actor, requestId, operatorId: null }));
}

/** A transaction of nobody yet: sign-in, sign-up, links from letters. */
export function inPublic<T>(
	{ actor, requestId = null }: Origin,
	run: (tx: PlainTx) => Promise<T>
): Promise<T> {
	return open({}, (sql) => run({ sql, actor, requestId, operatorId: null }));
}

/**
 * Runs a part of a transaction that may fail without the whole failing: what it did is undone, and its
 * error thrown on. (Drizzle's own `transaction` would begin and end the outer one.)
 */
export async function withSavepoint<T>(tx: TenantTx, run: () => Promise<T>): Promise<T> {
	await tx.sql.execute('savepoint part');
	try {
		const result = await run();
		await tx.sql.execute('release savepoint part');
		return result;
	} catch (error) {
		await tx.sql.execute('rollback to savepoint part');
		throw error;
	}
}

/** The operator that a public address names, or null. */
export function findOperatorBySlug(
	slug: string
): Promise<{ id: string; name: string; slug: string; status: 'open' | 'suspended' } | null> {
	return open({ operatorSlug: slug }, async (sql) => {
		const row = await sql.query.operator.findFirst({
			columns: { id: true, name: true, slug: true, status: true },
			where: (operator, { eq }) => eq(operator.slug, slug)
		});
		return row ?? null;
	});
}

/** The operator whose account at the payment service has this name, or null. */
export function findOperatorByPaymentAccount(accountId: string): Promise<string | null> {
	return open({ paymentAccount: accountId }, async (sql) => {
		const row = await sql.query.paymentAccount.findFirst({
			columns: { operatorId: true },
			where: (account, { eq }) => eq(account.accountId, accountId)
		});
		return row?.operatorId ?? null;
	});
}
