import type Stripe from 'stripe';
import { route, seconds, type Call, type Route } from '../call.ts';
import { findCard } from '../cards.ts';
import { invalid, missingResource } from '../errors.ts';
import { newId } from '../ids.ts';
import { page } from '../lists.ts';
import { mergeMetadata } from '../metadata.ts';
import { feePart, showAmount } from '../money.ts';
import { REFUND_CREATE, REFUND_LIST, REFUND_UPDATE, RETRIEVE } from '../params/tables.ts';
import { book } from './balance.ts';
import { feeDetail, findCharge } from './charges.ts';
import { emit } from './events.ts';
import { giveFeeBack } from './fees.ts';
import { findIntent } from './intents.ts';
import { schedule } from './tasks.ts';

function createRefund(call: Call, params: Stripe.RefundCreateParams): Stripe.Refund {
	const charge = chargeOf(call, params);
	const amount = checkAmount(charge, params.amount);
	const id = newId('re');
	const feeBack = params.refund_application_fee ? returnFee(call, charge, amount) : 0;
	const booked = book(call, call.owner, {
		type: 'refund',
		category: 'refund',
		amount: -amount,
		currency: charge.currency,
		source: id,
		description: 'REFUND FOR CHARGE',
		fees: feeBack ? [feeDetail('application_fee', -feeBack, charge.currency)] : []
	});
	const behaviour = findCard(call.tx.row('card', charge.id)?.value.number ?? '')?.refund;
	const refund = call.tx.put('refund', call.owner, id, {
		id,
		object: 'refund',
		amount,
		balance_transaction: booked.id,
		charge: charge.id,
		created: seconds(call),
		currency: charge.currency,
		customer: null,
		customer_account: null,
		destination_details: {
			card: {
				reference_status: 'pending',
				reference_type: 'acquirer_reference_number',
				type: 'refund'
			},
			type: 'card'
		},
		metadata: mergeMetadata(null, params.metadata),
		payment_intent: charge.payment_intent,
		payment_method: charge.payment_method,
		reason: params.reason ?? null,
		receipt_number: null,
		source_transfer_reversal: null,
		status: behaviour === 'pends' ? 'pending' : 'succeeded',
		transfer_reversal: null
	});
	const refunded = charge.amount_refunded + amount;
	const changed = call.tx.put('charge', call.owner, charge.id, {
		...charge,
		amount_refunded: refunded,
		refunded: refunded === charge.amount
	});
	emit(call, 'refund.created', refund);
	emit(call, 'charge.refunded', changed);
	if (behaviour === 'fails') schedule(call, 'fail_refund', id);
	if (behaviour === 'pends') schedule(call, 'settle_refund', id);
	return refund;
}

function chargeOf(call: Call, params: Stripe.RefundCreateParams): Stripe.Charge {
	if (params.charge !== undefined) return findCharge(call, params.charge, 'charge');
	if (params.payment_intent === undefined) {
		throw invalid(
			'One of the following params should be provided for this request: payment_intent or charge.',
			{
				code: 'parameter_missing'
			}
		);
	}
	const intent = findIntent(call, params.payment_intent, 'payment_intent');
	if (intent.status !== 'succeeded' || typeof intent.latest_charge !== 'string') {
		throw invalid(
			`This PaymentIntent (${intent.id}) does not have a successful charge to refund.`,
			{
				param: 'payment_intent'
			}
		);
	}
	return findCharge(call, intent.latest_charge, 'charge');
}

function checkAmount(charge: Stripe.Charge, wanted: number | undefined): number {
	if (!charge.paid) {
		throw invalid(`Charge ${charge.id} is not paid and can not be refunded.`, { param: 'charge' });
	}
	if (charge.disputed) {
		throw invalid(`Charge ${charge.id} has been charged back; cannot issue a refund.`, {
			code: 'charge_disputed'
		});
	}
	const left = charge.amount - charge.amount_refunded;
	if (left === 0) {
		throw invalid(`Charge ${charge.id} has already been refunded.`, {
			code: 'charge_already_refunded'
		});
	}
	const amount = wanted ?? left;
	if (amount > left) {
		throw invalid(
			`Refund amount (${showAmount(amount, charge.currency)}) is greater than unrefunded amount ` +
				`on charge (${showAmount(left, charge.currency)})`,
			{ param: 'amount', code: 'amount_too_large' }
		);
	}
	return amount;
}

/** Gives the platform's fee back in the proportion of what is refunded; answers how much. */
function returnFee(call: Call, charge: Stripe.Charge, amount: number): number {
	const fee =
		typeof charge.application_fee === 'string'
			? call.tx.find('fee', call.platform, charge.application_fee)
			: undefined;
	if (!fee) {
		throw invalid(`Charge ${charge.id} has no application fee to refund.`, {
			param: 'refund_application_fee'
		});
	}
	const back = Math.max(
		0,
		feePart(fee.amount, charge.amount, charge.amount_refunded + amount, fee.amount_refunded)
	);
	if (back > 0) giveFeeBack(call, fee, back);
	return back;
}

/** A refund that seemed well comes back from the bank: the money is on the balance again. */
export function failRefund(call: Call, refund: Stripe.Refund): void {
	if (refund.status === 'failed' || typeof refund.charge !== 'string') return;
	const booked = book(call, call.owner, {
		type: 'refund_failure',
		category: 'refund_failure',
		amount: refund.amount,
		currency: refund.currency,
		source: refund.id,
		description: 'REFUND FAILED'
	});
	const failed = call.tx.put('refund', call.owner, refund.id, {
		...refund,
		failure_balance_transaction: booked.id,
		failure_reason: 'expired_or_canceled_card',
		status: 'failed'
	});
	const charge = findCharge(call, refund.charge, 'charge');
	call.tx.put('charge', call.owner, charge.id, {
		...charge,
		amount_refunded: charge.amount_refunded - refund.amount,
		refunded: false
	});
	emit(call, 'refund.updated', failed);
	emit(call, 'charge.refund.updated', failed);
	emit(call, 'refund.failed', failed);
}

/** A refund that took a while arrives. */
export function settleRefund(call: Call, refund: Stripe.Refund): void {
	if (refund.status !== 'pending') return;
	const settled = call.tx.put('refund', call.owner, refund.id, { ...refund, status: 'succeeded' });
	emit(call, 'refund.updated', settled);
	emit(call, 'charge.refund.updated', settled);
}

function findRefund(call: Call, id: string): Stripe.Refund {
	const refund = call.tx.find('refund', call.owner, id);
	if (!refund) throw missingResource('refund', id, 'refund');
	return refund;
}

export const refundRoutes: Route[] = [
	route<Stripe.RefundCreateParams>('POST', '/v1/refunds', REFUND_CREATE, createRefund),
	route<Stripe.RefundListParams>('GET', '/v1/refunds', REFUND_LIST, (call, params) => {
		const rows = call.tx
			.rows('refund', call.owner)
			.filter(
				({ value }) =>
					(params.charge === undefined || value.charge === params.charge) &&
					(params.payment_intent === undefined || value.payment_intent === params.payment_intent)
			);
		return page(rows, params, '/v1/refunds', (value) => value.created);
	}),
	route<object>('GET', '/v1/refunds/{refund}', RETRIEVE, (call, _params, [id = '']) =>
		findRefund(call, id)
	),
	route<Stripe.RefundUpdateParams>(
		'POST',
		'/v1/refunds/{refund}',
		REFUND_UPDATE,
		(call, params, [id = '']) => {
			const refund = findRefund(call, id);
			const metadata = mergeMetadata(refund.metadata, params.metadata);
			const updated = call.tx.put('refund', call.owner, id, { ...refund, metadata });
			emit(call, 'refund.updated', updated);
			return updated;
		}
	)
];
