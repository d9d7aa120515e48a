import { boolean, index, integer, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import { createdAt, id, instant, tenantOrPlatformPolicy } from './columns';
import { operator } from './operators';

/** What goes with a letter; it is drawn up from the rows it names when the letter is sent. */
export type Enclosure =
	/** A numbered document as PDF. */
	| { kind: 'document'; documentId: string }
	/** The QR pictures of the tickets that the letter shows, and the calendar entry of their order. */
	| { kind: 'tickets'; orderId: string; ticketIds?: string[] };

/**
 * The outbox: a letter is written in the transaction that causes it and sent by a job afterwards.
 * operator_id is NULL for letters about a person's own account.
 */
export const letter = pgTable(
	'letter',
	{
		id: id(),
		operatorId: uuid('operator_id').references(() => operator.id),
		/** What the letter is for, for example `invitation`. */
		kind: text('kind').notNull(),
		toAddress: text('to_address').notNull(),
		subject: text('subject').notNull(),
		bodyText: text('body_text').notNull(),
		bodyHtml: text('body_html').notNull(),
		enclosures: jsonb('enclosures').$type<Enclosure[]>().notNull().default([]),
		/** Same at every try, so that a repeat is recognisable (RFC 5322). */
		messageId: text('message_id').notNull(),
		/** The body holds a link that grants a right: it is wiped once sent. */
		wipeWhenSent: boolean('wipe_when_sent').notNull().default(false),
		status: text('status', { enum: ['waiting', 'sent', 'given_up'] })
			.notNull()
			.default('waiting'),
		attempts: integer('attempts').notNull().default(0),
		lastError: text('last_error'),
		sentAt: instant('sent_at'),
		createdAt: createdAt()
	},
	(t) => [
		unique('letter_operator_id_id_key').on(t.operatorId, t.id),
		unique('letter_message_id_key').on(t.messageId),
		index('letter_operator_id_created_at_index').on(t.operatorId, t.createdAt),
		tenantOrPlatformPolicy('letter')
	]
);
