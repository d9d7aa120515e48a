import { and, eq, inArray } from 'drizzle-orm';
import { addToTrail } from '../audit/trail';
import { order, payment, ticket } from '../db/schema';
import type { RefundPolicy } from '../db/schema/programmes';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { issueCreditNote } from '../invoicing/documents';
import { addJob } from '../jobs/add';
import { askForRefund } from '../payments/refunds';
import { writeCancellationLetter } from './letters';
import { lockOrder, type Order } from './settle';

export interface Cancellation {
	reason: 'visitor' | 'called_off' | 'box_office';
	/** Part of what was paid that goes back, 0 to 100. */
	percent: number;
	/** Read by the visitor; for called-off slots the planner's reason. */
	words?: string;
	weatherCallId?: string;
}

/** What a visitor who cancels at a moment gets back, in percent. */
export function refundPercent(policy: RefundPolicy, startsAt: Date, now: Date): number {
	const hoursLeft = (startsAt.getTime() - now.getTime()) / 3_600_000;
	return hoursLeft >= policy.untilHoursBefore ? policy.percent : 0;
}

/** Part of an amount, rounded half up in the visitor's favour, whole minor units. */
export function partOf(amountMinor: number, percent: number): number {
	return Math.min(amountMinor, Math.floor((amountMinor * percent) / 100 + 0.5));
}

/**
 * Cancels a paid order in one transaction: tickets void, the refund asked, a credit note, a letter.
 * Running it again changes nothing.
 * @returns what goes back in minor units; null when the order was not paid (any more)
 * @throws Refusal when somebody has entered with one of its tickets and it is not a call-off
 */
export async function cancelPaidOrder(
	tx: TenantTx,
	orderId: string,
	{ reason, percent, words, weatherCallId }: Cancellation,
	now: Date
): Promise<number | null> {
	const found = await lockOrder(tx, orderId);
	if (!found || found.status !== 'paid') return null;
	const used = await tx.sql.$count(
		ticket,
		and(
			eq(ticket.operatorId, tx.operatorId),
			eq(ticket.orderId, orderId),
			eq(ticket.status, 'used')
		)
	);
	if (used > 0 && reason !== 'called_off') {
		throw new Refusal('conflict', 'A ticket of this order has been used: it can not be cancelled.');
	}
	await tx.sql
		.update(ticket)
		.set({ status: 'void', usedAt: null })
		.where(
			and(
				eq(ticket.operatorId, tx.operatorId),
				eq(ticket.orderId, orderId),
				inArray(ticket.status, ['valid', 'used'])
			)
		);
	await tx.sql
		.update(order)
		.set({ status: 'cancelled', closedAt: now, closedReason: reason })
		.where(and(eq(order.operatorId, tx.operatorId), eq(order.id, orderId)));
	const back = partOf(await paidAmount(tx, found), percent);
	let creditNoteId: string | null = null;
	if (back > 0) {
		const refundId = await askForRefund(tx, {
			orderId,
			amountMinor: back,
			reason,
			weatherCallId
		});
		creditNoteId = await issueCreditNote(tx, found, { refundId, amountMinor: back }, now);
	}
	await writeCancellationLetter(tx, found, { reason, words, amountMinor: back, creditNoteId });
	await addToTrail(tx, {
		action: 'order.cancelled',
		subject: { type: 'order', id: orderId },
		before: { status: found.status },
		after: { status: 'cancelled', reason, refundMinor: back, currency: found.currency }
	});
	return back;
}

async function paidAmount(tx: TenantTx, found: Order): Promise<number> {
	const paid = await tx.sql.query.payment.findFirst({
		columns: { amountMinor: true },
		where: and(eq(payment.operatorId, tx.operatorId), eq(payment.orderId, found.id))
	});
	return paid?.amountMinor ?? 0;
}

/** Gives up an order that waits for money: its places are free at once, its session ends soon. */
export async function cancelPendingOrder(
	tx: TenantTx,
	orderId: string,
	reason: 'visitor' | 'called_off',
	now: Date
): Promise<boolean> {
	const changed = await tx.sql
		.update(order)
		.set({ status: 'cancelled', closedAt: now, closedReason: reason })
		.where(
			and(eq(order.operatorId, tx.operatorId), eq(order.id, orderId), eq(order.status, 'pending'))
		)
		.returning({ id: order.id });
	if (changed.length === 0) return false;
	await addJob(tx, 'end_hold', { operatorId: tx.operatorId, orderId }, { key: `hold-${orderId}` });
	return true;
}
