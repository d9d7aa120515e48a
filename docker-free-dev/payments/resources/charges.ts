import type Stripe from 'stripe';
import { route, seconds, type Call, type Route } from '../call.ts';
import type { Card } from '../cards.ts';
import { missingResource } from '../errors.ts';
import { newId } from '../ids.ts';
import { page } from '../lists.ts';
import { serviceFee } from '../money.ts';
import { CHARGE_LIST, RETRIEVE } from '../params/tables.ts';
import { book } from './balance.ts';
import { APPLICATION, takeFee } from './fees.ts';

/** Who pays, as given at the payment page. */
export interface Payer {
	email: string | null;
	name: string | null;
}

/** Why a charge failed. */
export interface Failure {
	code: string;
	declineCode: string;
	message: string;
}

/** Charges a card for an intent: books the money and the fees, or keeps the failed try. */
export function makeCharge(
	call: Call,
	intent: Stripe.PaymentIntent,
	card: Card,
	payer: Payer,
	failure: Failure | null
): Stripe.Charge {
	const id = newId('ch');
	call.tx.put('card', call.owner, id, { number: card.number });
	const connected = call.owner !== call.platform;
	const feeAmount = intent.application_fee_amount;
	let fee: Stripe.ApplicationFee | undefined;
	let booked: Stripe.BalanceTransaction | undefined;
	if (!failure) {
		const fees: Stripe.BalanceTransaction.FeeDetail[] = [];
		if (connected && feeAmount) {
			fee = takeFee(call, { id, currency: intent.currency }, feeAmount);
			fees.push(feeDetail('application_fee', feeAmount, intent.currency));
		}
		fees.push(feeDetail('stripe_fee', serviceFee(intent.amount), intent.currency));
		booked = book(call, call.owner, {
			type: 'charge',
			category: 'charge',
			amount: intent.amount,
			currency: intent.currency,
			source: id,
			description: intent.description,
			fees
		});
	}
	return call.tx.put('charge', call.owner, id, {
		id,
		object: 'charge',
		amount: intent.amount,
		amount_captured: failure ? 0 : intent.amount,
		amount_refunded: 0,
		application: connected ? APPLICATION : null,
		application_fee: fee?.id ?? null,
		application_fee_amount: feeAmount,
		balance_transaction: booked?.id ?? null,
		billing_details: {
			address: null,
			email: payer.email,
			name: payer.name,
			phone: null,
			tax_id: null
		},
		calculated_statement_descriptor: intent.statement_descriptor ?? 'BOWKEEPER DOUBLE',
		captured: !failure,
		created: seconds(call),
		currency: intent.currency,
		customer: null,
		description: intent.description,
		disputed: false,
		failure_balance_transaction: null,
		failure_code: failure?.code ?? null,
		failure_message: failure?.message ?? null,
		fraud_details: {},
		livemode: false,
		metadata: intent.metadata,
		on_behalf_of: null,
		outcome: {
			advice_code: null,
			network_advice_code: null,
			network_decline_code: null,
			network_status: failure ? 'declined_by_network' : 'approved_by_network',
			reason: failure?.declineCode ?? null,
			risk_level: 'normal',
			seller_message: failure ? failure.message : 'Payment complete.',
			type: failure ? 'issuer_declined' : 'authorized'
		},
		paid: !failure,
		payment_intent: intent.id,
		payment_method: newId('pm'),
		payment_method_details: { card: cardDetails(card, intent.amount), type: 'card' },
		receipt_email: intent.receipt_email,
		receipt_number: null,
		receipt_url: failure ? null : `${call.base}/receipt/${id}`,
		refunded: false,
		review: null,
		shipping: null,
		source: null,
		source_transfer: null,
		statement_descriptor: intent.statement_descriptor,
		statement_descriptor_suffix: intent.statement_descriptor_suffix,
		status: failure ? 'failed' : 'succeeded',
		transfer_data: null,
		transfer_group: null
	});
}

/** One line of what a movement cost. */
export function feeDetail(
	type: 'application_fee' | 'stripe_fee',
	amount: number,
	currency: string
): Stripe.BalanceTransaction.FeeDetail {
	return {
		amount,
		application: type === 'application_fee' ? APPLICATION : null,
		currency,
		description: type === 'application_fee' ? 'Platform fee' : 'Processing fee',
		type
	};
}

function cardDetails(card: Card, amount: number): Stripe.Charge.PaymentMethodDetails.Card {
	return {
		amount_authorized: amount,
		authorization_code: null,
		brand: card.brand,
		checks: { address_line1_check: null, address_postal_code_check: null, cvc_check: 'pass' },
		country: 'US',
		electronic_commerce_indicator: null,
		exp_month: 12,
		exp_year: new Date().getUTCFullYear() + 3,
		fingerprint: `double${card.number.slice(-10)}`,
		funding: 'credit',
		installments: null,
		last4: card.number.slice(-4),
		mandate: null,
		network: card.brand,
		network_transaction_id: null,
		regulated_status: 'unregulated',
		three_d_secure: null,
		transaction_link_id: null,
		wallet: null
	};
}

/** @throws ApiError when this account has no such charge. */
export function findCharge(call: Call, id: string, param: string): Stripe.Charge {
	const charge = call.tx.find('charge', call.owner, id);
	if (!charge) throw missingResource('charge', id, param);
	return charge;
}

export const chargeRoutes: Route[] = [
	route<Stripe.ChargeListParams>('GET', '/v1/charges', CHARGE_LIST, (call, params) => {
		const rows = call.tx
			.rows('charge', call.owner)
			.filter(
				({ value }) =>
					params.payment_intent === undefined || value.payment_intent === params.payment_intent
			);
		return page(rows, params, '/v1/charges', (value) => value.created);
	}),
	route<object>('GET', '/v1/charges/{charge}', RETRIEVE, (call, _params, [id = '']) =>
		findCharge(call, id, 'id')
	)
];
