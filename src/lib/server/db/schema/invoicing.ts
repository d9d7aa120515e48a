import { sql } from 'drizzle-orm';
import {
	check,
	date,
	foreignKey,
	index,
	integer,
	jsonb,
	pgTable,
	text,
	unique,
	uuid
} from 'drizzle-orm/pg-core';
import { amountMinor, createdAt, id, tenantPolicy } from './columns';
import { operator } from './operators';
import { order } from './orders';
import { refund } from './payments';

/** A party as it stands on a document. */
export interface Party {
	name: string;
	street: string;
	postcode: string;
	city: string;
	/** ISO 3166-1 alpha-2. */
	country: string;
	taxId: string | null;
	email: string;
}

/** The operator as the seller on its documents. */
export const seller = pgTable(
	'seller',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		name: text('name').notNull(),
		street: text('street').notNull(),
		postcode: text('postcode').notNull(),
		city: text('city').notNull(),
		country: text('country').notNull(),
		taxId: text('tax_id'),
		email: text('email').notNull()
	},
	(t) => [
		unique('seller_operator_id_id_key').on(t.operatorId, t.id),
		unique('seller_operator_key').on(t.operatorId),
		tenantPolicy('seller')
	]
);

/** A run of numbers without gap or repeat (promise 7). The number is taken in the issuing transaction. */
export const documentSeries = pgTable(
	'document_series',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		kind: text('kind', { enum: ['receipt', 'invoice', 'credit_note'] }).notNull(),
		year: integer('year').notNull(),
		prefix: text('prefix').notNull(),
		lastSequence: integer('last_sequence').notNull().default(0)
	},
	(t) => [
		unique('document_series_operator_id_id_key').on(t.operatorId, t.id),
		unique('document_series_kind_year_key').on(t.operatorId, t.kind, t.year),
		unique('document_series_prefix_key').on(t.operatorId, t.prefix),
		tenantPolicy('document_series')
	]
);

/** One line of a document, amounts in minor units. */
export interface DocumentLine {
	description: string;
	quantity: number;
	unitGrossMinor: number;
	grossMinor: number;
	netMinor: number;
	taxCategory: 'S' | 'Z' | 'E';
	taxPercent: string;
}

/** Tax of one category and rate. */
export interface DocumentTax {
	category: 'S' | 'Z' | 'E';
	percent: string;
	taxableMinor: number;
	taxMinor: number;
}

/** A numbered tax document. Added once, never changed or deleted (no such grant exists). */
export const document = pgTable(
	'document',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		seriesId: uuid('series_id').notNull(),
		/** Given by the database (trigger), as the number is. */
		sequence: integer('sequence').notNull().default(0),
		number: text('number').notNull().default(''),
		kind: text('kind', { enum: ['receipt', 'invoice', 'credit_note'] }).notNull(),
		orderId: uuid('order_id').notNull(),
		/** The document that a credit note corrects. */
		originalId: uuid('original_id'),
		/** The refund that a credit note goes with. */
		refundId: uuid('refund_id'),
		/** Local date of the site. */
		issueDate: date('issue_date').notNull(),
		supplyDate: date('supply_date').notNull(),
		seller: jsonb('seller').$type<Party>().notNull(),
		buyer: jsonb('buyer').$type<Pick<Party, 'name' | 'email'>>().notNull(),
		currency: text('currency').notNull(),
		netMinor: amountMinor('net_minor').notNull(),
		taxMinor: amountMinor('tax_minor').notNull(),
		grossMinor: amountMinor('gross_minor').notNull(),
		lines: jsonb('lines').$type<DocumentLine[]>().notNull(),
		taxes: jsonb('taxes').$type<DocumentTax[]>().notNull(),
		createdAt: createdAt()
	},
	(t) => [
		unique('document_operator_id_id_key').on(t.operatorId, t.id),
		unique('document_sequence_key').on(t.operatorId, t.seriesId, t.sequence),
		unique('document_number_key').on(t.operatorId, t.number),
		unique('document_refund_key').on(t.operatorId, t.refundId),
		index('document_order_index').on(t.operatorId, t.orderId),
		foreignKey({
			name: 'document_series_fk',
			columns: [t.operatorId, t.seriesId],
			foreignColumns: [documentSeries.operatorId, documentSeries.id]
		}),
		foreignKey({
			name: 'document_order_fk',
			columns: [t.operatorId, t.orderId],
			foreignColumns: [order.operatorId, order.id]
		}),
		foreignKey({
			name: 'document_original_fk',
			columns: [t.operatorId, t.originalId],
			foreignColumns: [t.operatorId, t.id]
		}),
		foreignKey({
			name: 'document_refund_fk',
			columns: [t.operatorId, t.refundId],
			foreignColumns: [refund.operatorId, refund.id]
		}),
		check('document_sum', sql`gross_minor = net_minor + tax_minor`),
		check('document_original', sql`(kind = 'credit_note') = (original_id is not null)`),
		tenantPolicy('document')
	]
);
