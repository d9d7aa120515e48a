import { ask, PaymentRefused, service } from './client';

export interface CheckoutOrder {
	accountId: string;
	operatorId: string;
	orderId: string;
	reference: string;
	email: string;
	currency: string;
	lines: { name: string; quantity: number; unitGrossMinor: number }[];
	applicationFeeMinor: number;
	/** When the service closes the session by itself; at least half an hour ahead. */
	closesAt: Date;
	/** Where the visitor comes back to, paid or not. */
	returnUrl: string;
}

/** Opens the payable page of an order; the same order always gets the same one. */
export async function openCheckout(
	order: CheckoutOrder
): Promise<{ sessionId: string; url: string }> {
	const metadata = { operatorId: order.operatorId, orderId: order.orderId };
	const session = await ask(
		service().checkout.sessions.create(
			{
				mode: 'payment',
				client_reference_id: order.orderId,
				customer_email: order.email,
				expires_at: Math.floor(order.closesAt.getTime() / 1000),
				success_url: order.returnUrl,
				cancel_url: order.returnUrl,
				line_items: order.lines.map((line) => ({
					quantity: line.quantity,
					price_data: {
						currency: order.currency.toLowerCase(),
						unit_amount: line.unitGrossMinor,
						product_data: { name: line.name }
					}
				})),
				payment_intent_data: {
					description: `Order ${order.reference}`,
					metadata,
					...(order.applicationFeeMinor > 0
						? { application_fee_amount: order.applicationFeeMinor }
						: {})
				},
				metadata
			},
			{ stripeAccount: order.accountId, idempotencyKey: `checkout-${order.orderId}` }
		)
	);
	if (!session.url) throw new Error('the payment service gave no address to pay at');
	return { sessionId: session.id, url: session.url };
}

/** A payment that went through. */
export interface ReceivedPayment {
	paymentIntentId: string;
	chargeId: string;
	amountMinor: number;
	applicationFeeMinor: number;
	currency: string;
	receivedAt: Date;
}

export interface Checkout {
	status: 'open' | 'complete' | 'expired';
	orderId: string | null;
	payment: ReceivedPayment | null;
}

function statusOf(status: string | null): Checkout['status'] {
	return status === 'complete' || status === 'expired' ? status : 'open';
}

/** What has become of a checkout session. */
export async function readCheckout(accountId: string, sessionId: string): Promise<Checkout> {
	const session = await ask(
		service().checkout.sessions.retrieve(
			sessionId,
			{ expand: ['payment_intent.latest_charge'] },
			{ stripeAccount: accountId }
		)
	);
	const intent = session.payment_intent;
	const charge = typeof intent === 'object' && intent ? intent.latest_charge : null;
	const paid = session.payment_status === 'paid' && typeof intent === 'object' && intent;
	return {
		status: statusOf(session.status),
		orderId: session.client_reference_id,
		payment:
			paid && typeof charge === 'object' && charge
				? {
						paymentIntentId: paid.id,
						chargeId: charge.id,
						amountMinor: charge.amount,
						applicationFeeMinor: charge.application_fee_amount ?? 0,
						currency: charge.currency.toUpperCase(),
						receivedAt: new Date(charge.created * 1000)
					}
				: null
	};
}

/**
 * Ends a session, so that it can no longer be paid.
 * @returns false when it was no longer open; then it is to be read again
 */
export async function endCheckout(accountId: string, sessionId: string): Promise<boolean> {
	try {
		await ask(
			service().checkout.sessions.expire(
				sessionId,
				{},
				{ stripeAccount: accountId, idempotencyKey: `end-${sessionId}` }
			)
		);
		return true;
	} catch (error) {
		if (error instanceof PaymentRefused) return false;
		throw error;
	}
}
