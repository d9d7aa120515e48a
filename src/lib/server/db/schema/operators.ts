import { sql } from 'drizzle-orm';
import {
	boolean,
	check,
	index,
	pgPolicy,
	pgTable,
	text,
	unique,
	uniqueIndex,
	uuid
} from 'drizzle-orm/pg-core';
import {
	appRole,
	createdAt,
	currentOperator,
	currentUser,
	id,
	instant,
	isPlatform,
	tenantPolicy
} from './columns';
import { user } from './people';

export const roles = ['owner', 'planner', 'box_office', 'steward', 'bookkeeper'] as const;
export type Role = (typeof roles)[number];

/** The tenant. */
export const operator = pgTable(
	'operator',
	{
		id: id(),
		/** Name in addresses: lower-case letters, digits and hyphens. */
		slug: text('slug').notNull(),
		name: text('name').notNull(),
		status: text('status', { enum: ['open', 'suspended'] })
			.notNull()
			.default('open'),
		suspendedReason: text('suspended_reason'),
		requireSecondStep: boolean('require_second_step').notNull().default(false),
		createdAt: createdAt()
	},
	(t) => [
		uniqueIndex('operator_slug_key').on(t.slug),
		check('operator_slug_form', sql`${t.slug} ~ '^[a-z0-9]([a-z0-9-]{0,58}[a-z0-9])?$'`),
		pgPolicy('operator_self', {
			for: 'all',
			to: appRole,
			using: sql`id = ${currentOperator}`,
			withCheck: sql`id = ${currentOperator}`
		}),
		pgPolicy('operator_of_member', {
			for: 'select',
			to: appRole,
			using: sql`exists (select 1 from member m where m.operator_id = "operator"."id" and m.user_id = ${currentUser})`
		}),
		// A visitor's page knows the name in the address and may learn that one row.
		pgPolicy('operator_by_slug', {
			for: 'select',
			to: appRole,
			using: sql`slug = nullif(current_setting('app.operator_slug', true), '')`
		}),
		pgPolicy('operator_platform', {
			for: 'all',
			to: appRole,
			using: isPlatform,
			withCheck: isPlatform
		})
	]
);

/** A person's role at an operator. */
export const member = pgTable(
	'member',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		userId: uuid('user_id')
			.notNull()
			.references(() => user.id),
		role: text('role', { enum: roles }).notNull(),
		createdAt: createdAt()
	},
	(t) => [
		unique('member_operator_id_id_key').on(t.operatorId, t.id),
		unique('member_operator_id_user_id_key').on(t.operatorId, t.userId),
		index('member_user_id_index').on(t.userId),
		tenantPolicy('member'),
		pgPolicy('member_own', {
			for: 'select',
			to: appRole,
			using: sql`user_id = ${currentUser}`
		})
	]
);

/** An open invitation to become a member. */
export const invitation = pgTable(
	'invitation',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		email: text('email').notNull(),
		role: text('role', { enum: roles }).notNull(),
		tokenHash: text('token_hash').notNull(),
		invitedBy: uuid('invited_by')
			.notNull()
			.references(() => user.id),
		expiresAt: instant('expires_at').notNull(),
		acceptedAt: instant('accepted_at'),
		withdrawnAt: instant('withdrawn_at'),
		createdAt: createdAt()
	},
	(t) => [
		unique('invitation_operator_id_id_key').on(t.operatorId, t.id),
		uniqueIndex('invitation_open_key')
			.on(t.operatorId, t.email)
			.where(sql`accepted_at is null and withdrawn_at is null`),
		tenantPolicy('invitation')
	]
);
