import { and, eq, inArray, sql } from 'drizzle-orm';
import { ledgerEntry, order, payment, refund } from '../db/schema';
import { inTenant, type TenantTx } from '../db/transaction';
import { addJob } from '../jobs/add';
import type { TaskPayloads } from '../jobs/tasks';
import { readPaymentAccount } from './accounts';
import { balanceTransactions, type BalanceTransaction } from './gateway';

const origin = { actor: { kind: 'worker', name: 'ledger' } } as const;

/** Has the ledger brought up to date soon; asking again before that changes nothing. */
export async function askForLedger(tx: TenantTx): Promise<void> {
	await addJob(
		tx,
		'sync_ledger',
		{ operatorId: tx.operatorId },
		{ key: `ledger-${tx.operatorId}`, queue: `ledger-${tx.operatorId}` }
	);
}

/**
 * Brings the ledger up to date with the service's balance transactions. Pages come newest first; the
 * first page without a new row ends the work, as all before it are known.
 */
export async function syncLedger({ operatorId }: TaskPayloads['sync_ledger']): Promise<void> {
	const account = await inTenant(operatorId, origin, readPaymentAccount);
	if (!account) return;
	for await (const page of balanceTransactions(account.accountId)) {
		const added = await inTenant(operatorId, origin, (tx) => addPage(tx, page));
		if (added === 0) return;
	}
}

async function addPage(tx: TenantTx, page: BalanceTransaction[]): Promise<number> {
	const sources = page.flatMap(({ sourceId }) => (sourceId ? [sourceId] : []));
	const payments = await tx.sql
		.select({ source: payment.chargeId, orderId: payment.orderId })
		.from(payment)
		.where(and(eq(payment.operatorId, tx.operatorId), inArray(payment.chargeId, sources)));
	const refunds = await tx.sql
		.select({ source: refund.providerRefundId, orderId: refund.orderId, refundId: refund.id })
		.from(refund)
		.where(and(eq(refund.operatorId, tx.operatorId), inArray(refund.providerRefundId, sources)));
	const orderOf = new Map(payments.map((row) => [row.source, row.orderId]));
	const refundOf = new Map(refunds.map((row) => [row.source, row]));
	// Booked before its id has reached us: what it carries says whose it is, if that is ours at all.
	const own = await ourOwn(tx, page);
	const orderBehind = ({ sourceId, named }: BalanceTransaction) =>
		(sourceId && (orderOf.get(sourceId) ?? refundOf.get(sourceId)?.orderId)) ||
		(named.orderId && own.orders.has(named.orderId) ? named.orderId : null);
	const refundBehind = ({ sourceId, named }: BalanceTransaction) =>
		(sourceId && refundOf.get(sourceId)?.refundId) ||
		(named.refundId && own.refunds.has(named.refundId) ? named.refundId : null);
	const added = await tx.sql
		.insert(ledgerEntry)
		.values(
			page.map((row) => {
				const { sourceId: _, named: __, ...entry } = row;
				return {
					operatorId: tx.operatorId,
					...entry,
					orderId: orderBehind(row),
					refundId: refundBehind(row)
				};
			})
		)
		.onConflictDoNothing({ target: [ledgerEntry.operatorId, ledgerEntry.balanceTransactionId] })
		.returning({ id: ledgerEntry.id });
	return added.length;
}

/** Which of the orders and refunds that the rows name there are. */
async function ourOwn(tx: TenantTx, page: BalanceTransaction[]) {
	const orderIds = page.flatMap(({ named }) => named.orderId ?? []);
	const refundIds = page.flatMap(({ named }) => named.refundId ?? []);
	const orders = await tx.sql
		.select({ id: order.id })
		.from(order)
		.where(and(eq(order.operatorId, tx.operatorId), inArray(order.id, orderIds)));
	const refunds = await tx.sql
		.select({ id: refund.id })
		.from(refund)
		.where(and(eq(refund.operatorId, tx.operatorId), inArray(refund.id, refundIds)));
	return {
		orders: new Set(orders.map(({ id }) => id)),
		refunds: new Set(refunds.map(({ id }) => id))
	};
}

/** What the ledger says the account holds, by currency, in minor units. */
export async function ledgerBalance(tx: TenantTx): Promise<Record<string, number>> {
	const rows = await tx.sql
		.select({ currency: ledgerEntry.currency, net: sql<string>`sum(${ledgerEntry.netMinor})` })
		.from(ledgerEntry)
		.where(eq(ledgerEntry.operatorId, tx.operatorId))
		.groupBy(ledgerEntry.currency);
	return Object.fromEntries(rows.map((row) => [row.currency, Number(row.net)]));
}
