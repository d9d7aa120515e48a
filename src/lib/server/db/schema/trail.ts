import { index, jsonb, pgTable, text, uuid } from 'drizzle-orm/pg-core';
import { id, instant, tenantOrPlatformPolicy } from './columns';
import { operator } from './operators';

/** Who did what, when, from what to what. Rows are added and never changed (no such grant exists). */
export const trail = pgTable(
	'trail',
	{
		id: id(),
		/** NULL for acts of the platform and of a person on their own account. */
		operatorId: uuid('operator_id').references(() => operator.id),
		at: instant('at').notNull().defaultNow(),
		actorKind: text('actor_kind', {
			enum: ['member', 'person', 'visitor', 'worker', 'platform']
		}).notNull(),
		actorUserId: uuid('actor_user_id'),
		/** The actor's name at that time. */
		actorName: text('actor_name').notNull(),
		/** Verb in the form `thing.done`, for example `member.invited`. */
		action: text('action').notNull(),
		subjectType: text('subject_type').notNull(),
		subjectId: text('subject_id'),
		before: jsonb('before'),
		after: jsonb('after'),
		requestId: text('request_id')
	},
	(t) => [
		index('trail_operator_id_id_index').on(t.operatorId, t.id),
		tenantOrPlatformPolicy('trail')
	]
);
