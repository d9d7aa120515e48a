import type Stripe from 'stripe';
import { route, seconds, type Call, type Route } from '../call.ts';
import { invalid, missingResource } from '../errors.ts';
import { newId } from '../ids.ts';
import { page } from '../lists.ts';
import { mergeMetadata } from '../metadata.ts';
import { checkChargeable } from '../money.ts';
import { INTENT_CANCEL, INTENT_CREATE, INTENT_LIST, RETRIEVE } from '../params/tables.ts';
import { emit } from './events.ts';

/** What an intent is made from: parameters of its own, or those of a session. */
export type IntentTerms = Pick<
	Stripe.PaymentIntentCreateParams,
	| 'amount'
	| 'currency'
	| 'application_fee_amount'
	| 'description'
	| 'metadata'
	| 'receipt_email'
	| 'statement_descriptor'
	| 'statement_descriptor_suffix'
>;

/** Makes an intent that waits for a card. */
export function makeIntent(call: Call, terms: IntentTerms): Stripe.PaymentIntent {
	const id = newId('pi');
	const intent = call.tx.put('intent', call.owner, id, {
		id,
		object: 'payment_intent',
		allowed_payment_method_types: null,
		amount: terms.amount,
		amount_capturable: 0,
		amount_details: { tip: {} },
		amount_received: 0,
		application: call.owner === call.platform ? null : 'ca_bowkeeperdouble',
		application_fee_amount: terms.application_fee_amount ?? null,
		automatic_payment_methods: null,
		canceled_at: null,
		cancellation_reason: null,
		capture_method: 'automatic',
		client_secret: newId(`${id}_secret`),
		confirmation_method: 'automatic',
		created: seconds(call),
		currency: terms.currency,
		customer: null,
		customer_account: null,
		description: terms.description ?? null,
		excluded_payment_method_types: null,
		last_payment_error: null,
		latest_charge: null,
		livemode: false,
		managed_payments: null,
		metadata: mergeMetadata(null, terms.metadata),
		next_action: null,
		on_behalf_of: null,
		payment_method: null,
		payment_method_configuration_details: null,
		payment_method_options: null,
		payment_method_types: ['card'],
		payment_record: null,
		processing: null,
		receipt_email: terms.receipt_email ?? null,
		review: null,
		setup_future_usage: null,
		shipping: null,
		source: null,
		statement_descriptor: terms.statement_descriptor ?? null,
		statement_descriptor_suffix: terms.statement_descriptor_suffix ?? null,
		status: 'requires_payment_method',
		transfer_data: null,
		transfer_group: null
	});
	emit(call, 'payment_intent.created', intent);
	return intent;
}

/**
 * Checks a platform's fee.
 * @throws ApiError when there is no connected account to take it from, or it is more than the amount.
 */
export function checkFee(call: Call, fee: number | undefined, amount: number, param: string): void {
	if (fee === undefined) return;
	if (call.owner === call.platform) {
		throw invalid(
			'Can only apply an application_fee_amount when the PaymentIntent is attempting a direct ' +
				'payment (using the Stripe-Account header) or a destination payment.',
			{ param, code: 'application_fees_not_allowed' }
		);
	}
	if (fee > amount) {
		throw invalid('The application fee cannot be greater than the amount of the payment.', {
			param
		});
	}
}

/** @throws ApiError when this account has no such intent. */
export function findIntent(call: Call, id: string, param = 'intent'): Stripe.PaymentIntent {
	const intent = call.tx.find('intent', call.owner, id);
	if (!intent) throw missingResource('payment_intent', id, param);
	return intent;
}

/** Ends an intent that was not paid. */
export function cancelIntent(
	call: Call,
	intent: Stripe.PaymentIntent,
	reason: Stripe.PaymentIntent.CancellationReason | null
): Stripe.PaymentIntent {
	const cancelled = call.tx.put('intent', call.owner, intent.id, {
		...intent,
		canceled_at: seconds(call),
		cancellation_reason: reason,
		status: 'canceled'
	});
	emit(call, 'payment_intent.canceled', cancelled);
	return cancelled;
}

export const intentRoutes: Route[] = [
	route<Stripe.PaymentIntentListParams>('GET', '/v1/payment_intents', INTENT_LIST, (call, params) =>
		page(
			call.tx.rows('intent', call.owner),
			params,
			'/v1/payment_intents',
			(value) => value.created
		)
	),
	route<object>('GET', '/v1/payment_intents/{intent}', RETRIEVE, (call, _params, [id = '']) =>
		findIntent(call, id)
	),
	route<Stripe.PaymentIntentCreateParams>(
		'POST',
		'/v1/payment_intents',
		INTENT_CREATE,
		(call, params) => {
			if (params.confirm) {
				throw invalid('The payment double plays confirm as a call of its own only.', {
					param: 'confirm'
				});
			}
			checkChargeable(params.amount, params.currency, 'amount');
			checkFee(call, params.application_fee_amount, params.amount, 'application_fee_amount');
			return makeIntent(call, params);
		}
	),
	route<Stripe.PaymentIntentCancelParams>(
		'POST',
		'/v1/payment_intents/{intent}/cancel',
		INTENT_CANCEL,
		(call, params, [id = '']) => {
			const intent = findIntent(call, id);
			if (!['requires_payment_method', 'requires_action'].includes(intent.status)) {
				throw invalid(
					`You cannot cancel this PaymentIntent because it has a status of ${intent.status}. Only ` +
						'a PaymentIntent with one of the following statuses may be canceled: ' +
						'requires_payment_method, requires_capture, requires_confirmation, requires_action, ' +
						'processing.',
					{ param: 'intent', code: 'payment_intent_unexpected_state' }
				);
			}
			return cancelIntent(call, intent, params.cancellation_reason ?? null);
		}
	)
];
