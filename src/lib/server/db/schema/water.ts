import { sql } from 'drizzle-orm';
import { check, date, foreignKey, index, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import { createdAt, id, instant, tenantPolicy } from './columns';
import { operator } from './operators';
import { site } from './sites';

/** What was done to a site's water, and when it is due again. Entries are added, never changed. */
export const waterEntry = pgTable(
	'water_entry',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		siteId: uuid('site_id').notNull(),
		kind: text('kind', { enum: ['disinfection', 'sample', 'inspection'] }).notNull(),
		/** Local date of the site. */
		doneOn: date('done_on').notNull(),
		nextDueOn: date('next_due_on'),
		note: text('note').notNull().default(''),
		notedBy: uuid('noted_by').notNull(),
		notedByName: text('noted_by_name').notNull(),
		/** When the letter that it is due again was written. */
		remindedAt: instant('reminded_at'),
		createdAt: createdAt()
	},
	(t) => [
		unique('water_entry_operator_id_id_key').on(t.operatorId, t.id),
		index('water_entry_site_index').on(t.operatorId, t.siteId, t.kind, t.doneOn),
		foreignKey({
			name: 'water_entry_site_fk',
			columns: [t.operatorId, t.siteId],
			foreignColumns: [site.operatorId, site.id]
		}),
		check('water_entry_due', sql`next_due_on is null or next_due_on >= done_on`),
		tenantPolicy('water_entry')
	]
);
