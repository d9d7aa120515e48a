import type Stripe from 'stripe';
import { route, seconds, type Call, type Route } from '../call.ts';
import { missingResource } from '../errors.ts';
import { newId } from '../ids.ts';
import { page } from '../lists.ts';
import { BALANCE_LIST, RETRIEVE } from '../params/tables.ts';

export interface Movement {
	type: Stripe.BalanceTransaction.Type;
	category: string;
	amount: number;
	currency: string;
	source: string;
	description?: string | null;
	fees?: Stripe.BalanceTransaction.FeeDetail[];
}

/**
 * Books a movement on an account's balance. What it nets is the amount less the fees; the balance is
 * the sum of all nets, whatever else happens.
 */
export function book(call: Call, owner: string, movement: Movement): Stripe.BalanceTransaction {
	const fees = movement.fees ?? [];
	const fee = fees.reduce((sum, one) => sum + one.amount, 0);
	const id = newId('txn');
	return call.tx.put('balance', owner, id, {
		id,
		object: 'balance_transaction',
		amount: movement.amount,
		available_on: seconds(call),
		balance_type: 'payments',
		created: seconds(call),
		currency: movement.currency,
		description: movement.description ?? null,
		exchange_rate: null,
		fee,
		fee_details: fees,
		net: movement.amount - fee,
		reporting_category: movement.category,
		source: movement.source,
		status: 'available',
		type: movement.type
	});
}

/** Sums of an account by currency, in the order of the currencies' names. */
export function balanceOf(tx: Call['tx'], owner: string): Map<string, number> {
	const sums = new Map<string, number>();
	for (const { value } of tx.rows('balance', owner)) {
		sums.set(value.currency, (sums.get(value.currency) ?? 0) + value.net);
	}
	return new Map([...sums].sort(([a], [b]) => (a < b ? -1 : 1)));
}

export const balanceRoutes: Route[] = [
	route<object>('GET', '/v1/balance', RETRIEVE, (call): Stripe.Balance => {
		const sums = [...balanceOf(call.tx, call.owner)];
		const own = call.tx.row('account', call.owner)?.value.default_currency ?? 'eur';
		const rows = sums.length > 0 ? sums : [[own, 0] as const];
		return {
			object: 'balance',
			// The double's money is there at once: nothing is pending.
			available: rows.map(([currency, amount]) => ({
				amount,
				currency,
				source_types: { card: amount }
			})),
			connect_reserved: rows.map(([currency]) => ({ amount: 0, currency })),
			livemode: false,
			pending: rows.map(([currency]) => ({ amount: 0, currency, source_types: { card: 0 } }))
		};
	}),
	route<Stripe.BalanceTransactionListParams>(
		'GET',
		'/v1/balance_transactions',
		BALANCE_LIST,
		(call, params) => {
			const rows = call.tx
				.rows('balance', call.owner)
				.filter(
					({ value }) =>
						(params.currency === undefined || value.currency === params.currency) &&
						(params.type === undefined || value.type === params.type) &&
						(params.source === undefined || value.source === params.source)
				);
			return page(rows, params, '/v1/balance_transactions', (value) => value.created);
		}
	),
	route<object>('GET', '/v1/balance_transactions/{id}', RETRIEVE, (call, _params, [id = '']) => {
		const found = call.tx.find('balance', call.owner, id);
		if (!found) throw missingResource('balance transaction', id, 'id');
		return found;
	})
];
