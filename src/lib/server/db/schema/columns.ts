import { sql } from 'drizzle-orm';
import { bigint, customType, pgPolicy, pgRole, timestamp, uuid } from 'drizzle-orm/pg-core';
import { v7 as uuidv7 } from 'uuid';

/** The role of the web server and the worker: owns nothing, does not bypass row-level security. */
export const appRole = pgRole('bowkeeper_app').existing();

/** The operator whose transaction this is; NULL outside a tenant transaction (the setting is '' then). */
export const currentOperator = sql`nullif(current_setting('app.operator_id', true), '')::uuid`;

/** The person who is signed in; NULL when nobody is. */
export const currentUser = sql`nullif(current_setting('app.user_id', true), '')::uuid`;

/** True in a transaction opened for the platform administration. */
export const isPlatform = sql`coalesce(current_setting('app.platform', true), '') = 'on'`;

/** Primary key: UUIDv7, sortable by time of creation and unguessable in links. */
export const id = () =>
	uuid('id')
		.primaryKey()
		.$defaultFn(() => uuidv7());

/** A moment in time, stored as an instant. */
export const instant = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' });

/** An amount of money in whole minor units of the row's currency (ISO 4217). */
export const amountMinor = (name: string) => bigint(name, { mode: 'number' });

/** Bytes. */
export const bytes = customType<{ data: Buffer }>({ dataType: () => 'bytea' });

export const createdAt = () => instant('created_at').notNull().defaultNow();

/** Rows are visible and writable to their own operator alone. */
export const tenantPolicy = (table: string) =>
	pgPolicy(`${table}_tenant`, {
		for: 'all',
		to: appRole,
		using: sql`operator_id = ${currentOperator}`,
		withCheck: sql`operator_id = ${currentOperator}`
	});

/** As `tenantPolicy`, for tables whose rows may also belong to the platform (operator_id NULL). */
export const tenantOrPlatformPolicy = (table: string) =>
	pgPolicy(`${table}_tenant`, {
		for: 'all',
		to: appRole,
		using: sql`operator_id is not distinct from ${currentOperator}`,
		withCheck: sql`operator_id is not distinct from ${currentOperator}`
	});
