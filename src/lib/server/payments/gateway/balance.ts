import type Stripe from 'stripe';
import { isUuid } from '../../../ids';
import { ask, service } from './client';

export interface BalanceTransaction {
	balanceTransactionId: string;
	kind: string;
	amountMinor: number;
	feeMinor: number;
	netMinor: number;
	currency: string;
	/** The charge or refund behind it. */
	sourceId: string | null;
	/** Our own ids, as that charge or refund carries them; whoever has the account can change them. */
	named: { orderId: string | null; refundId: string | null };
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
				{
					limit: 100,
					// What lies behind a row names our order even before we know its id.
					expand: ['data.source'],
					...(after ? { starting_after: after } : {})
				},
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
			named: namedBy(row.source),
			bookedAt: new Date(row.created * 1000)
		}));
		if (!page.has_more) return;
		after = page.data.at(-1)!.id;
	}
}

function namedBy(source: Stripe.BalanceTransaction['source']): BalanceTransaction['named'] {
	const metadata =
		typeof source === 'object' && source && 'metadata' in source ? source.metadata : null;
	const id = (name: string) => {
		const value = metadata?.[name];
		return value && isUuid(value) ? value : null;
	};
	return { orderId: id('orderId'), refundId: id('refundId') };
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
