import { and, desc, eq, lt, sql } from 'drizzle-orm';
import { demand } from '../auth/rights';
import { ledgerEntry, order } from '../db/schema';
import type { TenantTx } from '../db/transaction';

/** The ledger's rows, newest first, with the order that each belongs to. */
export async function listLedger(
	tx: TenantTx,
	{ most, before }: { most: number; before?: string }
) {
	demand(tx, 'money.read');
	const rows = await tx.sql
		.select({
			id: ledgerEntry.id,
			bookedAt: ledgerEntry.bookedAt,
			kind: ledgerEntry.kind,
			amountMinor: ledgerEntry.amountMinor,
			feeMinor: ledgerEntry.feeMinor,
			netMinor: ledgerEntry.netMinor,
			currency: ledgerEntry.currency,
			orderId: ledgerEntry.orderId,
			reference: order.reference
		})
		.from(ledgerEntry)
		.leftJoin(order, eq(order.id, ledgerEntry.orderId))
		.where(
			and(
				eq(ledgerEntry.operatorId, tx.operatorId),
				...(before ? [lt(ledgerEntry.id, before)] : [])
			)
		)
		.orderBy(desc(ledgerEntry.bookedAt), desc(ledgerEntry.id))
		.limit(most);
	return rows;
}

/** Sums of the ledger by currency: what came in, fees, what went back, what is left. */
export async function ledgerSums(tx: TenantTx) {
	demand(tx, 'money.read');
	const rows = await tx.sql
		.select({
			currency: ledgerEntry.currency,
			inMinor: sql<number>`sum(case when ${ledgerEntry.amountMinor} > 0 then ${ledgerEntry.amountMinor} else 0 end)::float8`,
			outMinor: sql<number>`sum(case when ${ledgerEntry.amountMinor} < 0 then ${ledgerEntry.amountMinor} else 0 end)::float8`,
			feeMinor: sql<number>`sum(${ledgerEntry.feeMinor})::float8`,
			netMinor: sql<number>`sum(${ledgerEntry.netMinor})::float8`
		})
		.from(ledgerEntry)
		.where(eq(ledgerEntry.operatorId, tx.operatorId))
		.groupBy(ledgerEntry.currency)
		.orderBy(ledgerEntry.currency);
	return rows;
}
