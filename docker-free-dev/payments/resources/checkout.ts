import type Stripe from 'stripe';
import type { Call } from '../call.ts';
import type { Card } from '../cards.ts';
import { invalid } from '../errors.ts';
import type { Payer } from './charges.ts';
import { emit } from './events.ts';
import { findIntent, makeIntent } from './intents.ts';
import { payIntent, type Challenge, type PayResult } from './pay.ts';

export type CheckoutResult =
	{ paid: true; session: Stripe.Checkout.Session } | Extract<PayResult, { paid: false }>;

/**
 * Pays an open session with a card, as the page does.
 * @throws ApiError when the session is complete or expired.
 */
export function payCheckout(
	call: Call,
	session: Stripe.Checkout.Session,
	card: Card,
	payer: Payer,
	challenge: Challenge
): CheckoutResult {
	if (session.status !== 'open') {
		throw invalid(`This Checkout Session is ${session.status} and can not be paid.`, {
			param: 'session',
			code: 'checkout_session_not_open'
		});
	}
	const terms = call.tx.row('terms', session.id)?.value;
	const intent =
		typeof session.payment_intent === 'string'
			? findIntent(call, session.payment_intent)
			: makeIntent(call, {
					...terms?.payment,
					amount: session.amount_total ?? 0,
					currency: session.currency ?? ''
				});
	const result = payIntent(call, intent, card, payer, challenge);
	if (!result.paid) {
		call.tx.put('session', call.owner, session.id, { ...session, payment_intent: intent.id });
		return result;
	}
	const complete = call.tx.put('session', call.owner, session.id, {
		...session,
		customer_details: {
			address: null,
			business_name: null,
			email: payer.email,
			individual_name: null,
			name: payer.name,
			phone: null,
			tax_exempt: 'none',
			tax_ids: null
		},
		payment_intent: intent.id,
		payment_status: 'paid',
		status: 'complete',
		url: null
	});
	emit(call, 'checkout.session.completed', complete);
	return { paid: true, session: complete };
}

/** The address of the shop to return to after paying. */
export function successAddress(session: Stripe.Checkout.Session): string {
	return (session.success_url ?? '/').replaceAll('{CHECKOUT_SESSION_ID}', session.id);
}
