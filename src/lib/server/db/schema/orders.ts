import { sql } from 'drizzle-orm';
import {
	check,
	foreignKey,
	index,
	integer,
	numeric,
	pgTable,
	text,
	unique,
	uuid
} from 'drizzle-orm/pg-core';
import { amountMinor, createdAt, id, instant, tenantPolicy } from './columns';
import { operator } from './operators';
import { priceCategory, slot } from './programmes';

/** What a visitor buys: places in one slot. While it is pending its places are held. */
export const order = pgTable(
	'order',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		slotId: uuid('slot_id').notNull(),
		/** Short name for talking about it; says nothing and grants nothing. */
		reference: text('reference').notNull(),
		/** Where it came from; hand sales and groups come later. */
		channel: text('channel', { enum: ['web', 'hand', 'group'] })
			.notNull()
			.default('web'),
		status: text('status', { enum: ['pending', 'paid', 'expired', 'cancelled'] })
			.notNull()
			.default('pending'),
		visitorName: text('visitor_name').notNull(),
		visitorEmail: text('visitor_email').notNull(),
		places: integer('places').notNull(),
		currency: text('currency').notNull(),
		totalMinor: amountMinor('total_minor').notNull(),
		/** Until when the places of a pending order are kept. */
		holdUntil: instant('hold_until').notNull(),
		paidAt: instant('paid_at'),
		/** When it expired or was cancelled. */
		closedAt: instant('closed_at'),
		/** Why it was cancelled. */
		closedReason: text('closed_reason', {
			enum: ['hold_lapsed', 'visitor', 'called_off', 'no_places', 'box_office']
		}),
		/** The payment service's checkout session and the address at which it is paid. */
		checkoutSessionId: text('checkout_session_id'),
		checkoutUrl: text('checkout_url'),
		createdAt: createdAt()
	},
	(t) => [
		unique('order_operator_id_id_key').on(t.operatorId, t.id),
		unique('order_reference_key').on(t.operatorId, t.reference),
		unique('order_checkout_session_key').on(t.checkoutSessionId),
		index('order_slot_index').on(t.operatorId, t.slotId, t.status),
		index('order_created_index').on(t.operatorId, t.createdAt),
		foreignKey({
			name: 'order_slot_fk',
			columns: [t.operatorId, t.slotId],
			foreignColumns: [slot.operatorId, slot.id]
		}),
		check('order_places', sql`places > 0`),
		check('order_total', sql`total_minor >= 0`),
		tenantPolicy('order')
	]
);

/** Places of one price category in an order, as they were priced when sold. */
export const orderLine = pgTable(
	'order_line',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		orderId: uuid('order_id').notNull(),
		priceCategoryId: uuid('price_category_id').notNull(),
		name: text('name').notNull(),
		quantity: integer('quantity').notNull(),
		unitGrossMinor: amountMinor('unit_gross_minor').notNull(),
		grossMinor: amountMinor('gross_minor').notNull(),
		taxCategory: text('tax_category', { enum: ['S', 'Z', 'E'] }).notNull(),
		taxPercent: numeric('tax_percent', { precision: 5, scale: 2 }).notNull()
	},
	(t) => [
		unique('order_line_operator_id_id_key').on(t.operatorId, t.id),
		index('order_line_order_index').on(t.operatorId, t.orderId),
		foreignKey({
			name: 'order_line_order_fk',
			columns: [t.operatorId, t.orderId],
			foreignColumns: [order.operatorId, order.id]
		}),
		foreignKey({
			name: 'order_line_price_category_fk',
			columns: [t.operatorId, t.priceCategoryId],
			foreignColumns: [priceCategory.operatorId, priceCategory.id]
		}),
		check('order_line_gross', sql`quantity > 0 and gross_minor = quantity * unit_gross_minor`),
		tenantPolicy('order_line')
	]
);

/** The right of one place to enter. */
export const ticket = pgTable(
	'ticket',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		orderId: uuid('order_id').notNull(),
		orderLineId: uuid('order_line_id').notNull(),
		slotId: uuid('slot_id').notNull(),
		/** Unguessable; what the QR holds. */
		code: text('code').notNull(),
		status: text('status', { enum: ['valid', 'used', 'moved', 'void'] })
			.notNull()
			.default('valid'),
		usedAt: instant('used_at'),
		/** The member who let the visitor in. */
		usedBy: uuid('used_by'),
		createdAt: createdAt()
	},
	(t) => [
		unique('ticket_operator_id_id_key').on(t.operatorId, t.id),
		unique('ticket_code_key').on(t.code),
		index('ticket_order_index').on(t.operatorId, t.orderId),
		index('ticket_slot_index').on(t.operatorId, t.slotId, t.status),
		foreignKey({
			name: 'ticket_order_fk',
			columns: [t.operatorId, t.orderId],
			foreignColumns: [order.operatorId, order.id]
		}),
		foreignKey({
			name: 'ticket_order_line_fk',
			columns: [t.operatorId, t.orderLineId],
			foreignColumns: [orderLine.operatorId, orderLine.id]
		}),
		foreignKey({
			name: 'ticket_slot_fk',
			columns: [t.operatorId, t.slotId],
			foreignColumns: [slot.operatorId, slot.id]
		}),
		check('ticket_used', sql`(status = 'used') = (used_at is not null)`),
		tenantPolicy('ticket')
	]
);
