import { and, desc, eq, sql } from 'drizzle-orm';
import { breakDown, breakDownCredit, spreadCredit } from '../../money';
import { localClock } from '../../schedule';
import { demand } from '../auth/rights';
import { document, documentSeries, order, orderLine, site, slot, zone } from '../db/schema';
import type { DocumentLine } from '../db/schema/invoicing';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { readSeller } from '../payments/accounts';

type Kind = (typeof document.$inferSelect)['kind'];

const letterOf: Record<Kind, string> = { receipt: 'R', invoice: 'I', credit_note: 'C' };

interface SoldOrder {
	id: string;
	slotId: string;
	currency: string;
	visitorName: string;
	visitorEmail: string;
}

/** The series of a kind and year, made when it is first needed. */
async function seriesOf(tx: TenantTx, kind: Kind, year: number): Promise<string> {
	const wanted = and(
		eq(documentSeries.operatorId, tx.operatorId),
		eq(documentSeries.kind, kind),
		eq(documentSeries.year, year)
	);
	const known = await tx.sql.query.documentSeries.findFirst({ where: wanted });
	if (known) return known.id;
	await tx.sql
		.insert(documentSeries)
		.values({ operatorId: tx.operatorId, kind, year, prefix: `${letterOf[kind]}${year}-` })
		.onConflictDoNothing();
	const made = await tx.sql.query.documentSeries.findFirst({ where: wanted });
	if (!made) throw new Error(`no series of ${kind} ${year}`);
	return made.id;
}

async function supplyOf(tx: TenantTx, slotId: string) {
	const [found] = await tx.sql
		.select({
			localDate: slot.localDate,
			startsAt: slot.startsAt,
			endsAt: slot.endsAt,
			zone: zone.name,
			site: site.name,
			timeZone: site.timeZone
		})
		.from(slot)
		.innerJoin(zone, eq(zone.id, slot.zoneId))
		.innerJoin(site, eq(site.id, slot.siteId))
		.where(and(eq(slot.operatorId, tx.operatorId), eq(slot.id, slotId)));
	if (!found) throw new Error(`no slot ${slotId}`);
	return found;
}

/** A letter or form with no seller entered can not go out with a document. */
async function demandSeller(tx: TenantTx) {
	const party = await readSeller(tx);
	if (!party) throw new Error('a document needs the seller');
	return party;
}

/**
 * Issues the receipt of a paid order, in the transaction that makes it paid. The database gives the
 * number.
 * @returns the document's id
 */
export async function issueReceipt(tx: TenantTx, sold: SoldOrder, now: Date): Promise<string> {
	const supply = await supplyOf(tx, sold.slotId);
	const sellerParty = await demandSeller(tx);
	const rows = await tx.sql.query.orderLine.findMany({
		where: and(eq(orderLine.operatorId, tx.operatorId), eq(orderLine.orderId, sold.id)),
		orderBy: orderLine.id
	});
	const { lineNetsMinor, taxes, netMinor, taxMinor, grossMinor } = breakDown(rows);
	const lines: DocumentLine[] = rows.map((row, i) => ({
		description: `${row.name}, ${supply.site}, ${supply.zone}`,
		quantity: row.quantity,
		unitGrossMinor: row.unitGrossMinor,
		grossMinor: row.grossMinor,
		netMinor: lineNetsMinor[i]!,
		taxCategory: row.taxCategory,
		taxPercent: row.taxPercent
	}));
	const issueDate = localClock(supply.timeZone).dateAt(now.getTime());
	const [issued] = await tx.sql
		.insert(document)
		.values({
			operatorId: tx.operatorId,
			seriesId: await seriesOf(tx, 'receipt', Number(issueDate.slice(0, 4))),
			kind: 'receipt',
			orderId: sold.id,
			issueDate,
			supplyDate: supply.localDate,
			seller: sellerParty,
			buyer: { name: sold.visitorName, email: sold.visitorEmail },
			currency: sold.currency,
			netMinor,
			taxMinor,
			grossMinor,
			lines,
			taxes: [...taxes]
		})
		.returning({ id: document.id });
	if (!issued) throw new Error('no receipt was written');
	return issued.id;
}

/**
 * Issues the credit note that goes with a refund. It names the receipt, and its amounts are what the
 * receipt says before less what it says after, so that credits of one receipt add up to it exactly.
 * @returns the document's id; null when the order had no receipt
 */
export async function issueCreditNote(
	tx: TenantTx,
	sold: SoldOrder,
	{ refundId, amountMinor }: { refundId: string; amountMinor: number },
	now: Date
): Promise<string | null> {
	const documents = await tx.sql.query.document.findMany({
		where: and(eq(document.operatorId, tx.operatorId), eq(document.orderId, sold.id)),
		orderBy: document.id
	});
	const receipt = documents.find(({ kind }) => kind === 'receipt');
	if (!receipt) return null;
	const supply = await supplyOf(tx, sold.slotId);
	const credits = documents.filter(({ kind }) => kind === 'credit_note');
	const left = receipt.lines.map((line, i) => ({
		...line,
		grossMinor: line.grossMinor - credits.reduce((sum, note) => sum + note.lines[i]!.grossMinor, 0)
	}));
	const parts = spreadCredit(left, amountMinor);
	const { lineNetsMinor, taxes, netMinor, taxMinor, grossMinor } = breakDownCredit(
		left.map((line, i) => ({ ...line, creditMinor: parts[i]! }))
	);
	const issueDate = localClock(supply.timeZone).dateAt(now.getTime());
	const [issued] = await tx.sql
		.insert(document)
		.values({
			operatorId: tx.operatorId,
			seriesId: await seriesOf(tx, 'credit_note', Number(issueDate.slice(0, 4))),
			kind: 'credit_note',
			orderId: sold.id,
			originalId: receipt.id,
			refundId,
			issueDate,
			supplyDate: receipt.supplyDate,
			seller: receipt.seller,
			buyer: receipt.buyer,
			currency: receipt.currency,
			netMinor,
			taxMinor,
			grossMinor,
			lines: receipt.lines.map((line, i) => ({
				...line,
				grossMinor: parts[i]!,
				netMinor: lineNetsMinor[i]!
			})),
			taxes: [...taxes]
		})
		.returning({ id: document.id });
	if (!issued) throw new Error('no credit note was written');
	return issued.id;
}

export type IssuedDocument = typeof document.$inferSelect & {
	/** For a credit note. */
	original: { number: string; issueDate: string } | null;
	reference: string;
};

/** One document whole; null when there is none. No right is asked: callers hold the order or the right. */
export async function readDocument(tx: TenantTx, id: string): Promise<IssuedDocument | null> {
	const found = await tx.sql.query.document.findFirst({
		where: and(eq(document.operatorId, tx.operatorId), eq(document.id, id))
	});
	if (!found) return null;
	const original = found.originalId
		? await tx.sql.query.document.findFirst({
				columns: { number: true, issueDate: true },
				where: and(eq(document.operatorId, tx.operatorId), eq(document.id, found.originalId))
			})
		: null;
	const sold = await tx.sql.query.order.findFirst({
		columns: { reference: true },
		where: and(eq(order.operatorId, tx.operatorId), eq(order.id, found.orderId))
	});
	return { ...found, original: original ?? null, reference: sold?.reference ?? '' };
}

/** One document for a member who may read money or orders. @throws Refusal */
export async function demandDocument(tx: TenantTx, id: string): Promise<IssuedDocument> {
	demand(tx, 'orders.read');
	const found = await readDocument(tx, id);
	if (!found) throw new Refusal('not_found', 'There is no such document.');
	return found;
}

/** The documents of an order, in the order of issue. */
export function documentsOfOrder(tx: TenantTx, orderId: string) {
	return tx.sql
		.select({
			id: document.id,
			number: document.number,
			kind: document.kind,
			issueDate: document.issueDate,
			grossMinor: document.grossMinor,
			currency: document.currency
		})
		.from(document)
		.where(and(eq(document.operatorId, tx.operatorId), eq(document.orderId, orderId)))
		.orderBy(document.id);
}

/** The newest documents of the operator, for the bookkeeper. */
export function listDocuments(tx: TenantTx, { most, before }: { most: number; before?: string }) {
	demand(tx, 'money.read');
	return tx.sql
		.select({
			id: document.id,
			number: document.number,
			kind: document.kind,
			issueDate: document.issueDate,
			buyer: document.buyer,
			netMinor: document.netMinor,
			taxMinor: document.taxMinor,
			grossMinor: document.grossMinor,
			currency: document.currency,
			orderId: document.orderId
		})
		.from(document)
		.where(
			and(
				eq(document.operatorId, tx.operatorId),
				...(before ? [sql`${document.id} < ${before}`] : [])
			)
		)
		.orderBy(desc(document.id))
		.limit(most);
}
