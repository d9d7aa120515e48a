import { and, eq } from 'drizzle-orm';
import { order, paymentEvent, refund } from '../db/schema';
import { findOperatorByPaymentAccount, inTenant } from '../db/transaction';
import { settleOrder } from '../booking/settle';
import { addJob } from '../jobs/add';
import type { TaskPayloads } from '../jobs/tasks';
import { log } from '../log';
import { readPaymentAccount, refreshAccount } from './accounts';
import { readCheckout, readRefund, type ServiceEvent } from './gateway';
import { askForLedger } from './ledger';
import { noteRefund } from './refunds';

const origin = { actor: { kind: 'worker', name: 'payments' } } as const;

/**
 * Keeps a verified event and the job that handles it, in one transaction. The same event again is
 * known by its name and changes nothing.
 */
export async function takeEvent(event: ServiceEvent): Promise<void> {
	const operatorId = event.accountId ? await findOperatorByPaymentAccount(event.accountId) : null;
	if (!operatorId) {
		// Of the platform's own account or of one that is not (yet) ours: nothing here hangs on it.
		log.info({ type: event.type }, 'payment event of no operator');
		return;
	}
	await inTenant(operatorId, origin, async (tx) => {
		const added = await tx.sql
			.insert(paymentEvent)
			.values({ operatorId, ...event })
			.onConflictDoNothing({ target: paymentEvent.eventId })
			.returning({ id: paymentEvent.id });
		const row = added[0];
		if (row) await addJob(tx, 'handle_payment_event', { operatorId, paymentEventId: row.id });
	});
}

/**
 * Handles one event by asking the service for the present state of what it names: so doubled, late
 * and reversed events all come to the same.
 */
export async function handlePaymentEvent({
	operatorId,
	paymentEventId
}: TaskPayloads['handle_payment_event']): Promise<void> {
	const { event, account } = await inTenant(operatorId, origin, async (tx) => ({
		event: await tx.sql.query.paymentEvent.findFirst({
			where: eq(paymentEvent.id, paymentEventId)
		}),
		account: await readPaymentAccount(tx)
	}));
	if (!event || event.handledAt || !account) return;
	if (event.type.startsWith('checkout.session.')) {
		await onCheckout(operatorId, account.accountId, event.objectId);
	} else if (event.type.startsWith('refund.')) {
		await onRefund(operatorId, account.accountId, event.objectId);
	} else if (event.type === 'account.updated') {
		await refreshAccount(operatorId, origin);
	}
	await inTenant(operatorId, origin, async (tx) => {
		await tx.sql
			.update(paymentEvent)
			.set({ handledAt: new Date() })
			.where(eq(paymentEvent.id, paymentEventId));
		if (movesMoney(event.type)) await askForLedger(tx);
	});
}

function movesMoney(type: string): boolean {
	return /^(charge|refund|payout|checkout\.session\.completed|application_fee)/.test(type);
}

async function onCheckout(operatorId: string, accountId: string, sessionId: string) {
	const known = await inTenant(operatorId, origin, (tx) =>
		tx.sql.query.order.findFirst({
			columns: { id: true },
			where: eq(order.checkoutSessionId, sessionId)
		})
	);
	if (known) return settleOrder(operatorId, known.id, 'event');
	// Paid before the session's name was stored with the order: the session itself names the order.
	const { orderId } = await readCheckout(accountId, sessionId);
	if (!orderId) return;
	await inTenant(operatorId, origin, (tx) =>
		tx.sql
			.update(order)
			.set({ checkoutSessionId: sessionId })
			.where(and(eq(order.id, orderId), eq(order.operatorId, operatorId)))
	);
	await settleOrder(operatorId, orderId, 'event');
}

async function onRefund(operatorId: string, accountId: string, providerRefundId: string) {
	const state = await readRefund(accountId, providerRefundId);
	await inTenant(operatorId, origin, async (tx) => {
		const known = await tx.sql.query.refund.findFirst({
			columns: { id: true },
			where: eq(refund.providerRefundId, providerRefundId)
		});
		const id = known?.id ?? state.refundId;
		if (id) await noteRefund(tx, id, state);
	});
}
