import type Stripe from 'stripe';
import { route, seconds, type Call, type Route } from '../call.ts';
import { missingResource } from '../errors.ts';
import { newId } from '../ids.ts';
import { page } from '../lists.ts';
import { FEE_LIST, RETRIEVE } from '../params/tables.ts';
import { book } from './balance.ts';
import { emit } from './events.ts';

/** The application that the platform is to its connected accounts. */
export const APPLICATION = 'ca_bowkeeperdouble';

/** Takes the platform's fee from a charge on a connected account and books it for the platform. */
export function takeFee(
	call: Call,
	charge: { id: string; currency: string },
	amount: number
): Stripe.ApplicationFee {
	const id = newId('fee');
	const booked = book(call, call.platform, {
		type: 'application_fee',
		category: 'platform_earning',
		amount,
		currency: charge.currency,
		source: id
	});
	const fee = call.tx.put('fee', call.platform, id, {
		id,
		object: 'application_fee',
		account: call.owner,
		amount,
		amount_refunded: 0,
		application: APPLICATION,
		balance_transaction: booked.id,
		charge: charge.id,
		created: seconds(call),
		currency: charge.currency,
		fee_source: { charge: charge.id, type: 'charge' },
		livemode: false,
		originating_transaction: null,
		refunded: false,
		refunds: {
			object: 'list',
			data: [],
			has_more: false,
			url: `/v1/application_fees/${id}/refunds`
		}
	});
	emit(call, 'application_fee.created', fee, call.platform);
	return fee;
}

/** Gives a part of the platform's fee back to the account that it was taken from. */
export function giveFeeBack(call: Call, fee: Stripe.ApplicationFee, amount: number): void {
	const id = newId('fr');
	const booked = book(call, call.platform, {
		type: 'application_fee_refund',
		category: 'platform_earning_refund',
		amount: -amount,
		currency: fee.currency,
		source: id
	});
	const back = call.tx.put('feeRefund', call.platform, id, {
		id,
		object: 'fee_refund',
		amount,
		balance_transaction: booked.id,
		created: seconds(call),
		currency: fee.currency,
		fee: fee.id,
		metadata: {}
	});
	const amountRefunded = fee.amount_refunded + amount;
	const changed = call.tx.put('fee', call.platform, fee.id, {
		...fee,
		amount_refunded: amountRefunded,
		refunded: amountRefunded === fee.amount,
		refunds: { ...fee.refunds, data: [back, ...fee.refunds.data] }
	});
	emit(call, 'application_fee.refunded', changed, call.platform);
}

export const feeRoutes: Route[] = [
	route<Stripe.ApplicationFeeListParams>(
		'GET',
		'/v1/application_fees',
		FEE_LIST,
		(call, params) => {
			const rows = call.tx
				.rows('fee', call.owner)
				.filter(({ value }) => params.charge === undefined || value.charge === params.charge);
			return page(rows, params, '/v1/application_fees', (value) => value.created);
		}
	),
	route<object>('GET', '/v1/application_fees/{id}', RETRIEVE, (call, _params, [id = '']) => {
		const fee = call.tx.find('fee', call.owner, id);
		if (!fee) throw missingResource('application fee', id, 'id');
		return fee;
	})
];
