import { sql } from 'drizzle-orm';
import {
	boolean,
	check,
	foreignKey,
	index,
	integer,
	pgPolicy,
	pgTable,
	text,
	unique,
	uniqueIndex,
	uuid
} from 'drizzle-orm/pg-core';
import {
	amountMinor,
	appRole,
	createdAt,
	id,
	instant,
	tenantOrPlatformPolicy,
	tenantPolicy
} from './columns';
import { operator } from './operators';
import { order } from './orders';
import { weatherCall } from './weather';

/** The operator's account at the payment service. */
export const paymentAccount = pgTable(
	'payment_account',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		/** The service's own name of the account, `acct_...`. */
		accountId: text('account_id').notNull(),
		chargesEnabled: boolean('charges_enabled').notNull().default(false),
		/** The platform's part of each payment, in hundredths of a percent. */
		platformFeeBasisPoints: integer('platform_fee_basis_points').notNull().default(250),
		createdAt: createdAt()
	},
	(t) => [
		unique('payment_account_operator_id_id_key').on(t.operatorId, t.id),
		unique('payment_account_operator_key').on(t.operatorId),
		unique('payment_account_account_id_key').on(t.accountId),
		check('payment_account_fee', sql`platform_fee_basis_points between 0 and 5000`),
		tenantPolicy('payment_account'),
		// An event of the payment service names an account: that one row may be found.
		pgPolicy('payment_account_by_account', {
			for: 'select',
			to: appRole,
			using: sql`account_id = nullif(current_setting('app.payment_account', true), '')`
		})
	]
);

/** Money that came in for an order; an order is paid at most once (promise 4). */
export const payment = pgTable(
	'payment',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		orderId: uuid('order_id').notNull(),
		paymentIntentId: text('payment_intent_id').notNull(),
		chargeId: text('charge_id').notNull(),
		amountMinor: amountMinor('amount_minor').notNull(),
		/** The platform's part, given back in proportion with a refund. */
		applicationFeeMinor: amountMinor('application_fee_minor').notNull().default(0),
		currency: text('currency').notNull(),
		receivedAt: instant('received_at').notNull()
	},
	(t) => [
		unique('payment_operator_id_id_key').on(t.operatorId, t.id),
		unique('payment_order_key').on(t.operatorId, t.orderId),
		unique('payment_charge_key').on(t.chargeId),
		foreignKey({
			name: 'payment_order_fk',
			columns: [t.operatorId, t.orderId],
			foreignColumns: [order.operatorId, order.id]
		}),
		tenantPolicy('payment')
	]
);

/** Money going back. */
export const refund = pgTable(
	'refund',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		orderId: uuid('order_id').notNull(),
		paymentId: uuid('payment_id').notNull(),
		amountMinor: amountMinor('amount_minor').notNull(),
		currency: text('currency').notNull(),
		status: text('status', { enum: ['asked', 'sent', 'done', 'failed'] })
			.notNull()
			.default('asked'),
		reason: text('reason', {
			enum: ['called_off', 'visitor', 'no_places', 'box_office']
		}).notNull(),
		weatherCallId: uuid('weather_call_id'),
		/** The failed refund that this one tries again. */
		retryOf: uuid('retry_of'),
		/** The service's own name of the refund, `re_...`. */
		providerRefundId: text('provider_refund_id'),
		/** Why it failed, in words for the box office. */
		fault: text('fault'),
		createdAt: createdAt(),
		doneAt: instant('done_at')
	},
	(t) => [
		unique('refund_operator_id_id_key').on(t.operatorId, t.id),
		unique('refund_provider_key').on(t.providerRefundId),
		// One refund of an order per cause: a call-off that runs again finds the first one's row.
		uniqueIndex('refund_call_off_key')
			.on(t.operatorId, t.orderId)
			.where(sql`reason = 'called_off' and status <> 'failed'`),
		index('refund_weather_call_index').on(t.operatorId, t.weatherCallId),
		foreignKey({
			name: 'refund_order_fk',
			columns: [t.operatorId, t.orderId],
			foreignColumns: [order.operatorId, order.id]
		}),
		foreignKey({
			name: 'refund_payment_fk',
			columns: [t.operatorId, t.paymentId],
			foreignColumns: [payment.operatorId, payment.id]
		}),
		foreignKey({
			name: 'refund_weather_call_fk',
			columns: [t.operatorId, t.weatherCallId],
			foreignColumns: [weatherCall.operatorId, weatherCall.id]
		}),
		foreignKey({
			name: 'refund_retry_fk',
			columns: [t.operatorId, t.retryOf],
			foreignColumns: [t.operatorId, t.id]
		}),
		uniqueIndex('refund_retry_key').on(t.operatorId, t.retryOf),
		check('refund_amount', sql`amount_minor > 0`),
		tenantPolicy('refund')
	]
);

/**
 * The operator's account as the payment service keeps it: one row for each of its balance
 * transactions. Rows are added and never changed (no such grant exists).
 */
export const ledgerEntry = pgTable(
	'ledger_entry',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		/** The service's own name of the balance transaction, `txn_...`. */
		balanceTransactionId: text('balance_transaction_id').notNull(),
		kind: text('kind').notNull(),
		amountMinor: amountMinor('amount_minor').notNull(),
		feeMinor: amountMinor('fee_minor').notNull(),
		netMinor: amountMinor('net_minor').notNull(),
		currency: text('currency').notNull(),
		orderId: uuid('order_id'),
		refundId: uuid('refund_id'),
		bookedAt: instant('booked_at').notNull()
	},
	(t) => [
		unique('ledger_entry_operator_id_id_key').on(t.operatorId, t.id),
		unique('ledger_entry_transaction_key').on(t.operatorId, t.balanceTransactionId),
		index('ledger_entry_booked_index').on(t.operatorId, t.bookedAt),
		foreignKey({
			name: 'ledger_entry_order_fk',
			columns: [t.operatorId, t.orderId],
			foreignColumns: [order.operatorId, order.id]
		}),
		foreignKey({
			name: 'ledger_entry_refund_fk',
			columns: [t.operatorId, t.refundId],
			foreignColumns: [refund.operatorId, refund.id]
		}),
		check('ledger_entry_net', sql`net_minor = amount_minor - fee_minor`),
		tenantPolicy('ledger_entry')
	]
);

/**
 * Webhook events that were verified, so that each is handled once. Only names are kept: the handler
 * asks the service for the present state, and so the order of events does not matter. operator_id is
 * NULL for an event of the platform's own account.
 */
export const paymentEvent = pgTable(
	'payment_event',
	{
		id: id(),
		operatorId: uuid('operator_id').references(() => operator.id),
		/** The service's own name of the event, `evt_...`. */
		eventId: text('event_id').notNull(),
		type: text('type').notNull(),
		accountId: text('account_id'),
		/** The object that it speaks of, such as `cs_...`. */
		objectId: text('object_id').notNull(),
		receivedAt: instant('received_at').notNull().defaultNow(),
		handledAt: instant('handled_at')
	},
	(t) => [
		unique('payment_event_operator_id_id_key').on(t.operatorId, t.id),
		unique('payment_event_event_id_key').on(t.eventId),
		tenantOrPlatformPolicy('payment_event')
	]
);
