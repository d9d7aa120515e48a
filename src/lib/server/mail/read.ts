import { desc, eq, lt, and } from 'drizzle-orm';
import { demand } from '../auth/rights';
import { letter } from '../db/schema';
import type { TenantTx } from '../db/transaction';

/** A page of the operator's letters, newest first. */
export async function listLetters(tx: TenantTx, { after, most }: { after?: string; most: number }) {
	demand(tx, 'letters.read');
	const rows = await tx.sql
		.select({
			id: letter.id,
			kind: letter.kind,
			toAddress: letter.toAddress,
			subject: letter.subject,
			status: letter.status,
			attempts: letter.attempts,
			lastError: letter.lastError,
			createdAt: letter.createdAt,
			sentAt: letter.sentAt
		})
		.from(letter)
		.where(and(eq(letter.operatorId, tx.operatorId), after ? lt(letter.id, after) : undefined))
		.orderBy(desc(letter.id))
		.limit(most + 1);
	const page = rows.slice(0, most);
	return { rows: page, next: rows.length > most ? (page.at(-1)?.id ?? null) : null };
}
