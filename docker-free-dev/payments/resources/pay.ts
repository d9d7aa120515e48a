import type Stripe from 'stripe';
import type { Call, Outcome, Route } from '../call.ts';
import { findCard, type Card } from '../cards.ts';
import { ApiError, invalid, type ErrorBody } from '../errors.ts';
import { INTENT_CONFIRM } from '../params/tables.ts';
import { emit } from './events.ts';
import { makeCharge, type Failure, type Payer } from './charges.ts';
import { findIntent } from './intents.ts';
import { schedule } from './tasks.ts';

/** How the bank's question was answered; null: it was not asked yet. */
export type Challenge = 'pass' | 'fail' | null;

export type PayResult =
	| { paid: true; intent: Stripe.PaymentIntent }
	| { paid: false; intent: Stripe.PaymentIntent; error: ErrorBody };

/**
 * Tries a card on an intent: the money moves, or the failed try is kept and told. Nothing is thrown
 * for a refused card, as the try itself must stay on record.
 */
export function payIntent(
	call: Call,
	intent: Stripe.PaymentIntent,
	card: Card,
	payer: Payer,
	challenge: Challenge
): PayResult {
	if (card.challenge && challenge === 'fail') {
		return refuse(call, intent, card, payer, {
			code: 'payment_intent_authentication_failure',
			declineCode: 'authentication_required',
			message:
				'The provided PaymentMethod has failed authentication. You can provide ' +
				'payment_method_data or a new PaymentMethod to attempt to fulfill this PaymentIntent again.'
		});
	}
	if (card.outcome === 'declines') {
		const declineCode = card.declineCode ?? 'generic_decline';
		return refuse(call, intent, card, payer, {
			code: 'card_declined',
			declineCode,
			message:
				declineCode === 'insufficient_funds'
					? 'Your card has insufficient funds.'
					: 'Your card was declined.'
		});
	}
	const charge = makeCharge(call, intent, card, payer, null);
	const paid = call.tx.put('intent', call.owner, intent.id, {
		...intent,
		amount_received: intent.amount,
		last_payment_error: null,
		latest_charge: charge.id,
		next_action: null,
		payment_method: charge.payment_method,
		status: 'succeeded'
	});
	emit(call, 'charge.succeeded', charge);
	emit(call, 'payment_intent.succeeded', paid);
	if (card.disputes) schedule(call, 'open_dispute', charge.id);
	return { paid: true, intent: paid };
}

function refuse(
	call: Call,
	intent: Stripe.PaymentIntent,
	card: Card,
	payer: Payer,
	failure: Failure
): PayResult {
	// A question that the bank's customer failed never became a charge.
	const charge =
		failure.code === 'card_declined' ? makeCharge(call, intent, card, payer, failure) : undefined;
	const type = 'card_error' as const;
	const code = failure.code as Stripe.PaymentIntent.LastPaymentError.Code;
	const common = { message: failure.message, ...(charge ? { charge: charge.id } : {}) };
	const decline = charge ? { decline_code: failure.declineCode } : {};
	const failed = call.tx.put('intent', call.owner, intent.id, {
		...intent,
		last_payment_error: { ...common, ...decline, code, type },
		latest_charge: charge?.id ?? intent.latest_charge,
		next_action: null,
		payment_method: null,
		status: 'requires_payment_method'
	});
	if (charge) emit(call, 'charge.failed', charge);
	emit(call, 'payment_intent.payment_failed', failed);
	return {
		paid: false,
		intent: failed,
		error: { ...common, ...decline, code: failure.code, type, payment_intent: failed }
	};
}

/** The published names of test payment methods, for a confirmation without a page. */
const METHODS: Record<string, string> = {
	pm_card_visa: '4242424242424242',
	pm_card_mastercard: '5555555555554444',
	pm_card_chargeDeclined: '4000000000000002',
	pm_card_visa_chargeDeclined: '4000000000000002',
	pm_card_visa_chargeDeclinedInsufficientFunds: '4000000000009995',
	pm_card_chargeDeclinedInsufficientFunds: '4000000000009995',
	pm_card_refundFail: '4000000000005126',
	pm_card_pendingRefund: '4000000000007726',
	pm_card_createDispute: '4000000000000259'
};

export const payRoutes: Route[] = [
	{
		method: 'POST',
		path: '/v1/payment_intents/{intent}/confirm',
		fields: INTENT_CONFIRM,
		run: (call, params, [id = '']): Outcome => {
			const { payment_method: method } = params as Stripe.PaymentIntentConfirmParams;
			const intent = findIntent(call, id);
			if (intent.status !== 'requires_payment_method') {
				throw invalid(
					`You cannot confirm this PaymentIntent because it has a status of ${intent.status}.`,
					{ code: 'payment_intent_unexpected_state' }
				);
			}
			if (method === undefined) {
				throw invalid('You must provide a payment method to confirm this PaymentIntent.', {
					param: 'payment_method',
					code: 'parameter_missing'
				});
			}
			const card = findCard(METHODS[method] ?? '');
			if (!card) {
				throw invalid(`No such PaymentMethod: '${method}'`, {
					param: 'payment_method',
					code: 'resource_missing'
				});
			}
			const result = payIntent(call, intent, card, { email: null, name: null }, null);
			if (result.paid) return { status: 200, body: result.intent };
			return { status: 402, body: { error: result.error } };
		}
	}
];

/** The error that a refused card is answered with. */
export function refusal(error: ErrorBody): ApiError {
	return new ApiError(402, error);
}
