import type Stripe from 'stripe';
import { route, seconds, type Call, type Route } from '../call.ts';
import { invalid, missingResource } from '../errors.ts';
import { newId } from '../ids.ts';
import { page } from '../lists.ts';
import { disputeFee } from '../money.ts';
import { DISPUTE_LIST, RETRIEVE } from '../params/tables.ts';
import { book } from './balance.ts';
import { emit } from './events.ts';

const ANSWER_WITHIN_S = 7 * 24 * 60 * 60;

/** The cardholder takes the money back through the bank; the service takes its fee for that. */
export function openDispute(call: Call, charge: Stripe.Charge): void {
	if (charge.disputed) return;
	const id = newId('dp');
	const { currency } = charge;
	const amount = charge.amount - charge.amount_refunded;
	if (amount === 0) return;
	const taken = book(call, call.owner, {
		type: 'adjustment',
		category: 'dispute',
		amount: -amount,
		currency,
		source: id,
		description: `Chargeback withdrawal for ${charge.id}`,
		fees: [
			{
				amount: disputeFee(currency),
				application: null,
				currency,
				description: 'Dispute fee',
				type: 'stripe_fee'
			}
		]
	});
	const dispute = call.tx.put('dispute', call.owner, id, {
		id,
		object: 'dispute',
		amount,
		balance_transactions: [taken],
		charge: charge.id,
		created: seconds(call),
		currency,
		enhanced_eligibility_types: [],
		evidence: noEvidence(),
		evidence_details: {
			due_by: seconds(call) + ANSWER_WITHIN_S,
			enhanced_eligibility: {},
			has_evidence: false,
			past_due: false,
			submission_count: 0,
			submission_method: 'manual'
		},
		intended_submission_method: 'manual',
		is_charge_refundable: false,
		livemode: false,
		metadata: {},
		payment_intent: charge.payment_intent,
		reason: 'fraudulent',
		status: 'needs_response'
	});
	call.tx.put('charge', call.owner, charge.id, { ...charge, disputed: true });
	emit(call, 'charge.dispute.created', dispute);
	emit(call, 'charge.dispute.funds_withdrawn', dispute);
}

/** The bank decides: won gives the money back, not the fee. */
export function closeDispute(
	call: Call,
	dispute: Stripe.Dispute,
	status: 'won' | 'lost'
): Stripe.Dispute {
	if (dispute.status === 'won' || dispute.status === 'lost') {
		throw invalid(`The dispute was ${dispute.status} already.`);
	}
	const back =
		status === 'won'
			? [
					book(call, call.owner, {
						type: 'adjustment',
						category: 'dispute_reversal',
						amount: dispute.amount,
						currency: dispute.currency,
						source: dispute.id,
						description: 'Chargeback reversal'
					})
				]
			: [];
	const closed = call.tx.put('dispute', call.owner, dispute.id, {
		...dispute,
		balance_transactions: [...dispute.balance_transactions, ...back],
		status
	});
	emit(call, 'charge.dispute.closed', closed);
	if (status === 'won') emit(call, 'charge.dispute.funds_reinstated', closed);
	return closed;
}

function noEvidence(): Stripe.Dispute.Evidence {
	return {
		access_activity_log: null,
		billing_address: null,
		cancellation_policy: null,
		cancellation_policy_disclosure: null,
		cancellation_rebuttal: null,
		customer_communication: null,
		customer_email_address: null,
		customer_name: null,
		customer_purchase_ip: null,
		customer_signature: null,
		duplicate_charge_documentation: null,
		duplicate_charge_explanation: null,
		duplicate_charge_id: null,
		enhanced_evidence: {},
		product_description: null,
		receipt: null,
		refund_policy: null,
		refund_policy_disclosure: null,
		refund_refusal_explanation: null,
		service_date: null,
		service_documentation: null,
		shipping_address: null,
		shipping_carrier: null,
		shipping_date: null,
		shipping_documentation: null,
		shipping_tracking_number: null,
		uncategorized_file: null,
		uncategorized_text: null
	};
}

export const disputeRoutes: Route[] = [
	route<Stripe.DisputeListParams>('GET', '/v1/disputes', DISPUTE_LIST, (call, params) => {
		const rows = call.tx
			.rows('dispute', call.owner)
			.filter(
				({ value }) =>
					(params.charge === undefined || value.charge === params.charge) &&
					(params.payment_intent === undefined || value.payment_intent === params.payment_intent)
			);
		return page(rows, params, '/v1/disputes', (value) => value.created);
	}),
	route<object>('GET', '/v1/disputes/{dispute}', RETRIEVE, (call, _params, [id = '']) => {
		const dispute = call.tx.find('dispute', call.owner, id);
		if (!dispute) throw missingResource('dispute', id, 'dispute');
		return dispute;
	})
];
