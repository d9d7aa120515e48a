import { boolean, index, integer, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core';
import { createdAt, id, instant } from './columns';

/**
 * People and how they sign in. A person belongs to no operator (they may hold roles at several), so
 * these tables carry no operator_id; only `auth/` reads and writes them.
 */
export const user = pgTable(
	'user',
	{
		id: id(),
		/** Lower-cased when stored. */
		email: text('email').notNull(),
		name: text('name').notNull(),
		passwordHash: text('password_hash').notNull(),
		/** Shared secret of the second step, sealed with SECRET_KEY; NULL when there is none. */
		totpSecretSealed: text('totp_secret_sealed'),
		/** The last time step that was accepted, so that one code opens one session only. */
		totpLastStep: integer('totp_last_step'),
		secondStepSince: instant('second_step_since'),
		platformAdmin: boolean('platform_admin').notNull().default(false),
		createdAt: createdAt()
	},
	(t) => [uniqueIndex('user_email_key').on(t.email)]
);

/** Sessions; `id` is the SHA-256 of what the cookie holds, so that a copy of the table opens nothing. */
export const session = pgTable(
	'session',
	{
		id: text('id').primaryKey(),
		userId: uuid('user_id')
			.notNull()
			.references(() => user.id, { onDelete: 'cascade' }),
		expiresAt: instant('expires_at').notNull(),
		/** True once the second step was passed in this session. */
		secondStepPassed: boolean('second_step_passed').notNull().default(false),
		userAgent: text('user_agent').notNull().default(''),
		createdAt: createdAt(),
		lastSeenAt: instant('last_seen_at').notNull().defaultNow()
	},
	(t) => [index('session_user_id_index').on(t.userId)]
);

/** One-time codes that stand in for the second step. */
export const recoveryCode = pgTable(
	'recovery_code',
	{
		id: id(),
		userId: uuid('user_id')
			.notNull()
			.references(() => user.id, { onDelete: 'cascade' }),
		codeHash: text('code_hash').notNull(),
		usedAt: instant('used_at')
	},
	(t) => [index('recovery_code_user_id_index').on(t.userId)]
);

/** Links sent by letter: a new password, a new address. */
export const userToken = pgTable(
	'user_token',
	{
		id: id(),
		userId: uuid('user_id')
			.notNull()
			.references(() => user.id, { onDelete: 'cascade' }),
		purpose: text('purpose', { enum: ['password', 'address'] }).notNull(),
		tokenHash: text('token_hash').notNull(),
		/** The address to change to, for purpose `address`. */
		newEmail: text('new_email'),
		expiresAt: instant('expires_at').notNull(),
		usedAt: instant('used_at'),
		createdAt: createdAt()
	},
	(t) => [uniqueIndex('user_token_hash_key').on(t.tokenHash)]
);

/** A sign-up that waits for its address to be confirmed. */
export const signUp = pgTable(
	'sign_up',
	{
		id: id(),
		email: text('email').notNull(),
		name: text('name').notNull(),
		operatorName: text('operator_name').notNull(),
		passwordHash: text('password_hash').notNull(),
		tokenHash: text('token_hash').notNull(),
		expiresAt: instant('expires_at').notNull(),
		createdAt: createdAt()
	},
	(t) => [uniqueIndex('sign_up_token_hash_key').on(t.tokenHash)]
);
