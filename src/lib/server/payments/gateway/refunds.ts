import type Stripe from 'stripe';
import { ask, service } from './client';

export interface ServiceRefund {
	providerRefundId: string;
	/** Our own name of it, when we asked for it. */
	refundId: string | null;
	state: 'sent' | 'done' | 'failed';
	fault: string | null;
}

function refundOf(refund: Stripe.Refund): ServiceRefund {
	const state =
		refund.status === 'succeeded'
			? 'done'
			: refund.status === 'failed' || refund.status === 'canceled'
				? 'failed'
				: 'sent';
	return {
		providerRefundId: refund.id,
		refundId: refund.metadata?.['refundId'] ?? null,
		state,
		fault: state === 'failed' ? (refund.failure_reason ?? refund.status ?? 'failed') : null
	};
}

/**
 * Sends money back. One refund of ours is one refund there: by its idempotency key, and by a look at
 * what the payment already gave back when this is not the first try (keys are forgotten after a day).
 * @throws PaymentRefused when the service will not do it
 */
export async function sendRefund(refund: {
	accountId: string;
	operatorId: string;
	orderId: string;
	refundId: string;
	paymentIntentId: string;
	amountMinor: number;
	withApplicationFee: boolean;
	firstTry: boolean;
}): Promise<ServiceRefund> {
	const options = { stripeAccount: refund.accountId };
	if (!refund.firstTry) {
		for await (const known of service().refunds.list(
			{ payment_intent: refund.paymentIntentId, limit: 100 },
			options
		)) {
			if (known.metadata?.['refundId'] === refund.refundId) return refundOf(known);
		}
	}
	return refundOf(
		await ask(
			service().refunds.create(
				{
					payment_intent: refund.paymentIntentId,
					amount: refund.amountMinor,
					reason: 'requested_by_customer',
					...(refund.withApplicationFee ? { refund_application_fee: true } : {}),
					metadata: {
						operatorId: refund.operatorId,
						orderId: refund.orderId,
						refundId: refund.refundId
					}
				},
				{ ...options, idempotencyKey: `refund-${refund.refundId}` }
			)
		)
	);
}

/** The present state of a refund at the service. */
export async function readRefund(
	accountId: string,
	providerRefundId: string
): Promise<ServiceRefund> {
	return refundOf(
		await ask(service().refunds.retrieve(providerRefundId, {}, { stripeAccount: accountId }))
	);
}
