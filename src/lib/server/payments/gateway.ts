import Stripe from 'stripe';
import { env } from '../env';

/**
 * The one module that knows the payment service's SDK. Everything it answers is in our own types; a
 * double on loopback is reached by the environment alone.
 */
let client: Stripe | undefined;

function service(): Stripe {
	if (!client) {
		const { PAYMENT_API_URL, PAYMENT_SECRET_KEY } = env();
		const url = PAYMENT_API_URL ? new URL(PAYMENT_API_URL) : null;
		client = new Stripe(PAYMENT_SECRET_KEY, {
			maxNetworkRetries: 2,
			timeout: 20_000,
			telemetry: false,
			...(url && {
				protocol: url.protocol === 'https:' ? ('https' as const) : ('http' as const),
				host: url.hostname,
				...(url.port ? { port: Number(url.port) } : {})
			})
		});
	}
	return client;
}

/** The service refused for good: the same request would be refused again. */
export class PaymentRefused extends Error {
	override readonly name = 'PaymentRefused';
	constructor(
		message: string,
		/** The service's code, such as `charge_already_refunded`. */
		readonly code: string | null
	) {
		super(message);
	}
}

/** Runs a call; a refusal for good becomes PaymentRefused, all else (network, 429, 5xx) is thrown on. */
async function ask<T>(call: Promise<T>): Promise<T> {
	try {
		return await call;
	} catch (error) {
		if (
			error instanceof Stripe.errors.StripeInvalidRequestError ||
			error instanceof Stripe.errors.StripeCardError
		) {
			throw new PaymentRefused(error.message, error.code ?? null);
		}
		throw error;
	}
}

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

export interface BalanceTransaction {
	balanceTransactionId: string;
	kind: string;
	amountMinor: number;
	feeMinor: number;
	netMinor: number;
	currency: string;
	/** The charge or refund behind it. */
	sourceId: string | null;
	bookedAt: Date;
}

/** Pages of an account's balance transactions, newest first. */
export async function* balanceTransactions(
	accountId: string
): AsyncGenerator<BalanceTransaction[]> {
	let after: string | undefined;
	for (;;) {
		const page = await ask(
			service().balanceTransactions.list(
				{ limit: 100, ...(after ? { starting_after: after } : {}) },
				{ stripeAccount: accountId }
			)
		);
		if (page.data.length === 0) return;
		yield page.data.map((row) => ({
			balanceTransactionId: row.id,
			kind: row.type,
			amountMinor: row.amount,
			feeMinor: row.fee,
			netMinor: row.net,
			currency: row.currency.toUpperCase(),
			sourceId: typeof row.source === 'string' ? row.source : (row.source?.id ?? null),
			bookedAt: new Date(row.created * 1000)
		}));
		if (!page.has_more) return;
		after = page.data.at(-1)!.id;
	}
}

/** What the service says an account holds, available and pending together, by currency. */
export async function readBalance(accountId: string): Promise<Record<string, number>> {
	const balance = await ask(service().balance.retrieve({}, { stripeAccount: accountId }));
	const sums: Record<string, number> = {};
	for (const { amount, currency } of [...balance.available, ...balance.pending]) {
		const code = currency.toUpperCase();
		sums[code] = (sums[code] ?? 0) + amount;
	}
	return sums;
}

/** Opens an account at the service for an operator; once, whatever the number of tries. */
export async function openAccount(operator: {
	operatorId: string;
	name: string;
	email: string;
	country: string;
}): Promise<string> {
	const account = await ask(
		service().accounts.create(
			{
				type: 'standard',
				country: operator.country,
				email: operator.email,
				business_profile: { name: operator.name },
				metadata: { operatorId: operator.operatorId }
			},
			{ idempotencyKey: `account-${operator.operatorId}` }
		)
	);
	return account.id;
}

/** Whether an account may take payments. */
export async function readAccount(accountId: string): Promise<{ chargesEnabled: boolean }> {
	const account = await ask(service().accounts.retrieve(accountId));
	return { chargesEnabled: account.charges_enabled };
}

/** A page at the service on which the operator completes its account. */
export async function accountLink(accountId: string, returnUrl: string): Promise<string> {
	const link = await ask(
		service().accountLinks.create({
			account: accountId,
			type: 'account_onboarding',
			refresh_url: returnUrl,
			return_url: returnUrl
		})
	);
	return link.url;
}

/** An event as its names alone: what happened is asked of the service when it is handled. */
export interface ServiceEvent {
	eventId: string;
	type: string;
	accountId: string | null;
	objectId: string;
}

/**
 * Reads a webhook's body.
 * @returns null when the signature is not the service's, or too old
 */
export function verifyEvent(body: string, signature: string): ServiceEvent | null {
	let event: Stripe.Event;
	try {
		event = service().webhooks.constructEvent(body, signature, env().PAYMENT_WEBHOOK_SECRET);
	} catch (error) {
		if (error instanceof Stripe.errors.StripeSignatureVerificationError) return null;
		if (error instanceof SyntaxError) return null;
		throw error;
	}
	const object = event.data.object as { id?: unknown };
	return {
		eventId: event.id,
		type: event.type,
		accountId: event.account ?? null,
		objectId: typeof object.id === 'string' ? object.id : ''
	};
}
