import { and, eq } from 'drizzle-orm';
import { violates } from '../db/errors';
import { order, payment } from '../db/schema';
import { inTenant, withSavepoint, type TenantTx } from '../db/transaction';
import type { TaskPayloads } from '../jobs/tasks';
import { readPaymentAccount } from '../payments/accounts';
import { endCheckout, readCheckout, type ReceivedPayment } from '../payments/gateway';
import { askForLedger } from '../payments/ledger';
import { askForRefund } from '../payments/refunds';
import { writeMoneyBackLetter, writeTicketLetter } from './letters';
import { issueReceipt } from '../invoicing/documents';
import { issueTickets } from './tickets';

const origin = { actor: { kind: 'worker', name: 'booking' } } as const;

export type Order = typeof order.$inferSelect;

/** Who asks: the return page, an event of the service, or the end of the hold. */
export type SettleCause = 'return' | 'event' | 'hold_end';

/**
 * Brings an order to what the payment service says of it. The one way by which an order becomes paid
 * or expires, whoever asks first and however often: the return page, events in any order, and the end
 * of the hold all come here.
 */
export async function settleOrder(
	operatorId: string,
	orderId: string,
	cause: SettleCause,
	now = new Date()
): Promise<void> {
	const { found, account, paid } = await inTenant(operatorId, origin, async (tx) => ({
		found: await tx.sql.query.order.findFirst({ where: eq(order.id, orderId) }),
		account: await readPaymentAccount(tx),
		paid: await tx.sql.query.payment.findFirst({ where: eq(payment.orderId, orderId) })
	}));
	if (!found || paid) return;
	const sessionId = found.checkoutSessionId;
	if (sessionId && account) {
		let checkout = await readCheckout(account.accountId, sessionId);
		if (!checkout.payment && mustEnd(found, cause, now) && checkout.status === 'open') {
			await endCheckout(account.accountId, sessionId);
			// Paid in that very moment, or ended: either way it is final now.
			checkout = await readCheckout(account.accountId, sessionId);
		}
		if (checkout.payment) {
			const received = checkout.payment;
			await inTenant(operatorId, origin, (tx) => takePayment(tx, orderId, received, now));
			return;
		}
	}
	if (mustEnd(found, cause, now)) {
		await inTenant(operatorId, origin, (tx) => expireOrder(tx, orderId, now));
	}
}

/** The order no longer waits for money: its session is to be ended. */
function mustEnd(found: Order, cause: SettleCause, now: Date): boolean {
	if (found.status !== 'pending') return true;
	return cause === 'hold_end' && found.holdUntil <= now;
}

/** The job at the end of a hold. */
export async function endHold({ operatorId, orderId }: TaskPayloads['end_hold']): Promise<void> {
	await settleOrder(operatorId, orderId, 'hold_end');
}

async function expireOrder(tx: TenantTx, orderId: string, now: Date): Promise<void> {
	await tx.sql
		.update(order)
		.set({ status: 'expired', closedAt: now, closedReason: 'hold_lapsed' })
		.where(
			and(eq(order.operatorId, tx.operatorId), eq(order.id, orderId), eq(order.status, 'pending'))
		);
}

/** An order of no money: it is paid as soon as it is placed. */
export async function settleFreeOrder(tx: TenantTx, orderId: string, now: Date): Promise<void> {
	const found = await lockOrder(tx, orderId);
	if (!found || found.status !== 'pending' || found.totalMinor !== 0) return;
	await completeOrder(tx, found, now);
}

/**
 * Locks the order, so that of several that settle it at once only one does. Others may still point at it:
 * whoever holds a slot and notes down its orders must not wait for one who holds an order and wants the slot.
 */
export async function lockOrder(tx: TenantTx, orderId: string): Promise<Order | undefined> {
	const [found] = await tx.sql
		.select()
		.from(order)
		.where(and(eq(order.operatorId, tx.operatorId), eq(order.id, orderId)))
		.for('no key update');
	return found;
}

async function takePayment(
	tx: TenantTx,
	orderId: string,
	received: ReceivedPayment,
	now: Date
): Promise<void> {
	const found = await lockOrder(tx, orderId);
	if (!found) return;
	const added = await tx.sql
		.insert(payment)
		.values({ operatorId: tx.operatorId, orderId, ...received })
		.onConflictDoNothing({ target: [payment.operatorId, payment.orderId] })
		.returning({ id: payment.id });
	if (added.length === 0) return;
	await askForLedger(tx);
	if (found.status === 'cancelled') {
		const reason = found.closedReason === 'visitor' ? 'visitor' : 'called_off';
		await giveBack(tx, found, received.amountMinor, reason, now);
		return;
	}
	const outcome = await tryComplete(tx, found, now);
	if (outcome !== 'done') await giveBack(tx, found, received.amountMinor, outcome, now);
}

/** A payment after the hold lapsed takes places if there are any, and if the slot still stands. */
async function tryComplete(
	tx: TenantTx,
	found: Order,
	now: Date
): Promise<'done' | 'no_places' | 'called_off'> {
	try {
		await withSavepoint(tx, () => completeOrder(tx, found, now));
		return 'done';
	} catch (error) {
		if (violates(error, 'slot_places')) return 'no_places';
		if (violates(error, 'order_slot_open')) return 'called_off';
		throw error;
	}
}

/** Paid: tickets, receipt and letter, all or nothing. */
async function completeOrder(tx: TenantTx, found: Order, now: Date): Promise<void> {
	await issueTickets(tx, found);
	const receiptId = found.totalMinor > 0 ? await issueReceipt(tx, found, now) : null;
	await writeTicketLetter(tx, found, receiptId);
	// Last, because it locks the slot's row for everybody else who buys there.
	await tx.sql
		.update(order)
		.set({ status: 'paid', paidAt: now, closedAt: null, closedReason: null })
		.where(and(eq(order.operatorId, tx.operatorId), eq(order.id, found.id)));
}

/** The money came too late for places: it goes back, and the visitor is told. */
async function giveBack(
	tx: TenantTx,
	found: Order,
	amountMinor: number,
	reason: 'no_places' | 'called_off' | 'visitor',
	now: Date
): Promise<void> {
	if (found.status !== 'cancelled') {
		await tx.sql
			.update(order)
			.set({ status: 'cancelled', closedAt: now, closedReason: reason })
			.where(eq(order.id, found.id));
	}
	await askForRefund(tx, { orderId: found.id, amountMinor, reason });
	await writeMoneyBackLetter(tx, found, { amountMinor, reason });
}
