import { and, desc, eq, sql } from 'drizzle-orm';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { order, payment, refund } from '../db/schema';
import { inTenant, type TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { addJob } from '../jobs/add';
import type { Attempt, TaskPayloads } from '../jobs/tasks';
import { readPaymentAccount } from './accounts';
import { PaymentRefused, sendRefund, type ServiceRefund } from './gateway';
import { askForLedger } from './ledger';

const origin = { actor: { kind: 'worker', name: 'refunds' } } as const;

/** No later refund stands in this one's place. */
const notRetried = sql`not exists (select 1 from refund again where again.operator_id = ${refund.operatorId} and again.retry_of = ${refund.id})`;

export type RefundReason = (typeof refund.$inferSelect)['reason'];

/**
 * Asks for money to go back, in the transaction that causes it; a job sends it.
 * @param amountMinor above 0; the database refuses more than was paid
 * @returns the refund's id
 */
export async function askForRefund(
	tx: TenantTx,
	wanted: {
		orderId: string;
		amountMinor: number;
		reason: RefundReason;
		weatherCallId?: string | undefined;
		retryOf?: string;
	}
): Promise<string> {
	const paid = await tx.sql.query.payment.findFirst({
		where: and(eq(payment.operatorId, tx.operatorId), eq(payment.orderId, wanted.orderId))
	});
	if (!paid) throw new Error(`order ${wanted.orderId} was not paid`);
	const [row] = await tx.sql
		.insert(refund)
		.values({
			operatorId: tx.operatorId,
			orderId: wanted.orderId,
			paymentId: paid.id,
			amountMinor: wanted.amountMinor,
			currency: paid.currency,
			reason: wanted.reason,
			weatherCallId: wanted.weatherCallId ?? null,
			retryOf: wanted.retryOf ?? null
		})
		.returning({ id: refund.id });
	if (!row) throw new Error('no refund was written');
	await addJob(tx, 'send_refund', { operatorId: tx.operatorId, refundId: row.id });
	return row.id;
}

/** Sends one refund to the payment service; may run again after a crash at any point. */
export async function sendAskedRefund(
	{ operatorId, refundId }: TaskPayloads['send_refund'],
	attempt: Attempt
): Promise<void> {
	const asked = await inTenant(operatorId, origin, async (tx) => {
		const [row] = await tx.sql
			.select({
				status: refund.status,
				orderId: refund.orderId,
				amountMinor: refund.amountMinor,
				paymentIntentId: payment.paymentIntentId,
				applicationFeeMinor: payment.applicationFeeMinor
			})
			.from(refund)
			.innerJoin(payment, eq(payment.id, refund.paymentId))
			.where(and(eq(refund.operatorId, operatorId), eq(refund.id, refundId)));
		const account = await readPaymentAccount(tx);
		return row && account ? { ...row, accountId: account.accountId } : null;
	});
	if (!asked || asked.status !== 'asked') return;
	let state: ServiceRefund | null = null;
	let fault: string | null = null;
	try {
		state = await sendRefund({
			accountId: asked.accountId,
			operatorId,
			orderId: asked.orderId,
			refundId,
			paymentIntentId: asked.paymentIntentId,
			amountMinor: asked.amountMinor,
			withApplicationFee: asked.applicationFeeMinor > 0,
			firstTry: attempt.number === 1
		});
	} catch (error) {
		if (error instanceof PaymentRefused) fault = error.message;
		else if (attempt.number < attempt.of) throw error;
		else fault = 'The payment service could not be reached.';
	}
	await inTenant(operatorId, origin, (tx) =>
		noteRefund(tx, refundId, state ?? { providerRefundId: null, state: 'failed', fault })
	);
}

/** Keeps what the service says of a refund. `done` may still turn to `failed`: banks send money back. */
export async function noteRefund(
	tx: TenantTx,
	refundId: string,
	state: { providerRefundId: string | null; state: ServiceRefund['state']; fault: string | null }
): Promise<void> {
	const [before] = await tx.sql
		.select({ status: refund.status, orderId: refund.orderId })
		.from(refund)
		.where(and(eq(refund.operatorId, tx.operatorId), eq(refund.id, refundId)))
		.for('update');
	if (!before || before.status === 'failed' || before.status === state.state) return;
	await tx.sql
		.update(refund)
		.set({
			status: state.state,
			...(state.providerRefundId ? { providerRefundId: state.providerRefundId } : {}),
			fault: state.fault,
			doneAt: state.state === 'done' ? new Date() : null
		})
		.where(eq(refund.id, refundId));
	if (state.state === 'failed') {
		await addToTrail(tx, {
			action: 'refund.failed',
			subject: { type: 'order', id: before.orderId },
			after: { refundId, fault: state.fault }
		});
	}
	await askForLedger(tx);
}

/** Tries a failed refund again: a new one of the same amount that names it. */
export async function retryRefund(tx: TenantTx, refundId: string): Promise<void> {
	demand(tx, 'orders.write');
	const failed = await tx.sql.query.refund.findFirst({
		where: and(eq(refund.operatorId, tx.operatorId), eq(refund.id, refundId))
	});
	if (!failed) throw new Refusal('not_found', 'There is no such refund.');
	if (failed.status !== 'failed') throw new Refusal('conflict', 'This refund has not failed.');
	const again = await tx.sql.query.refund.findFirst({
		where: and(eq(refund.operatorId, tx.operatorId), eq(refund.retryOf, refundId))
	});
	if (again) throw new Refusal('conflict', 'This refund is being tried again already.');
	const id = await askForRefund(tx, {
		orderId: failed.orderId,
		amountMinor: failed.amountMinor,
		reason: failed.reason,
		weatherCallId: failed.weatherCallId ?? undefined,
		retryOf: failed.id
	});
	await addToTrail(tx, {
		action: 'refund.retried',
		subject: { type: 'order', id: failed.orderId },
		before: { refundId },
		after: { refundId: id }
	});
}

/** Refunds that failed and were not tried again: what a person has to look at. */
export function failedRefunds(tx: TenantTx) {
	demand(tx, 'orders.read');
	return tx.sql
		.select({
			id: refund.id,
			orderId: refund.orderId,
			reference: order.reference,
			visitorName: order.visitorName,
			amountMinor: refund.amountMinor,
			currency: refund.currency,
			fault: refund.fault,
			createdAt: refund.createdAt
		})
		.from(refund)
		.innerJoin(order, eq(order.id, refund.orderId))
		.where(
			and(
				eq(refund.operatorId, tx.operatorId),
				eq(refund.status, 'failed'),
				// A retry stands in its place.
				notRetried
			)
		)
		.orderBy(desc(refund.createdAt))
		.limit(200);
}
