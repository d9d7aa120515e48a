import { and, asc, desc, eq, ilike, lt, or, sql } from 'drizzle-orm';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { order, orderLine, payment, refund, site, slot, zone } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { documentsOfOrder } from '../invoicing/documents';
import { cancelPaidOrder, cancelPendingOrder, refundPercent } from './cancel';
import { listMoves, wasMovedByOperator } from './moves-of-order';
import { lockOrder } from './settle';
import { readRefundPolicy } from './slots-for-sale';
import { listTickets } from './tickets';

const headColumns = {
	id: order.id,
	reference: order.reference,
	status: order.status,
	closedReason: order.closedReason,
	visitorName: order.visitorName,
	visitorEmail: order.visitorEmail,
	places: order.places,
	currency: order.currency,
	totalMinor: order.totalMinor,
	holdUntil: order.holdUntil,
	createdAt: order.createdAt,
	paidAt: order.paidAt,
	slotId: order.slotId,
	programmeId: slot.programmeId,
	siteId: slot.siteId,
	localDate: slot.localDate,
	startsAt: slot.startsAt,
	endsAt: slot.endsAt,
	slotStatus: slot.status,
	arcDeg: slot.arcDeg,
	lookAzimuthDeg: slot.lookAzimuthDeg,
	dropDiameterUm: slot.dropDiameterUm,
	zone: zone.name,
	site: site.name,
	siteSlug: site.slug,
	timeZone: site.timeZone,
	arrival: site.arrival
};

function heads(tx: TenantTx) {
	return tx.sql
		.select(headColumns)
		.from(order)
		.innerJoin(slot, eq(slot.id, order.slotId))
		.innerJoin(zone, eq(zone.id, slot.zoneId))
		.innerJoin(site, eq(site.id, slot.siteId))
		.$dynamic();
}

/** An order whole, for whoever holds its key or the right; null when there is none. */
export async function readOrder(tx: TenantTx, orderId: string) {
	const [head] = await heads(tx).where(
		and(eq(order.operatorId, tx.operatorId), eq(order.id, orderId))
	);
	if (!head) return null;
	const lines = await tx.sql.query.orderLine.findMany({
		where: and(eq(orderLine.operatorId, tx.operatorId), eq(orderLine.orderId, orderId)),
		orderBy: orderLine.id
	});
	const refunds = await tx.sql.query.refund.findMany({
		where: and(eq(refund.operatorId, tx.operatorId), eq(refund.orderId, orderId)),
		orderBy: asc(refund.id)
	});
	const paid = await tx.sql.query.payment.findFirst({
		where: and(eq(payment.operatorId, tx.operatorId), eq(payment.orderId, orderId))
	});
	return {
		...head,
		lines,
		refunds,
		paidMinor: paid?.amountMinor ?? 0,
		tickets: await listTickets(tx, orderId, { moved: true }),
		moves: await listMoves(tx, orderId),
		documents: await documentsOfOrder(tx, orderId)
	};
}

export type WholeOrder = NonNullable<Awaited<ReturnType<typeof readOrder>>>;

/** An order for a member who may read orders. @throws Refusal */
export async function demandOrder(tx: TenantTx, orderId: string): Promise<WholeOrder> {
	demand(tx, 'orders.read');
	const found = await readOrder(tx, orderId);
	if (!found) throw new Refusal('not_found', 'There is no such order.');
	return found;
}

/** What a visitor who cancels now would get back. */
export async function cancellationTerms(tx: TenantTx, found: WholeOrder, now: Date) {
	// The terms are those of the programme under which it was sold, wherever it stands now.
	const [first] = found.moves;
	const policy = await readRefundPolicy(tx, first?.fromProgrammeId ?? found.programmeId);
	const used = found.tickets.some(({ status }) => status === 'used');
	const movedByOperator = wasMovedByOperator(found.moves);
	return {
		policy,
		/** The operator wished for another time: until it begins all of the money goes back. */
		movedByOperator,
		possible: found.status === 'paid' && !used && found.startsAt > now,
		percent:
			movedByOperator && found.startsAt > now ? 100 : refundPercent(policy, found.startsAt, now)
	};
}

/** A visitor gives up an order by its link: by the policy that it was sold under. */
export async function cancelByVisitor(tx: TenantTx, orderId: string, now: Date): Promise<void> {
	// Locked before it is read: a move at the same moment changes the terms.
	await lockOrder(tx, orderId);
	const found = await readOrder(tx, orderId);
	if (!found) throw new Refusal('not_found', 'There is no such order.');
	if (await cancelPendingOrder(tx, orderId, 'visitor', now)) return;
	const terms = await cancellationTerms(tx, found, now);
	if (!terms.possible) throw new Refusal('conflict', 'This order can no longer be cancelled.');
	await cancelPaidOrder(tx, orderId, { reason: 'visitor', percent: terms.percent }, now);
}

/** The box office cancels an order: by the policy, or in full. */
export async function cancelByBoxOffice(
	tx: TenantTx,
	{ orderId, inFull, words }: { orderId: string; inFull: boolean; words: string },
	now: Date
): Promise<void> {
	demand(tx, 'orders.write');
	await lockOrder(tx, orderId);
	const found = await demandOrder(tx, orderId);
	const terms = await cancellationTerms(tx, found, now);
	const back = await cancelPaidOrder(
		tx,
		orderId,
		{ reason: 'box_office', percent: inFull ? 100 : terms.percent, words },
		now
	);
	if (back === null) throw new Refusal('conflict', 'This order is not paid (any more).');
	await addToTrail(tx, {
		action: 'order.cancelled_for_visitor',
		subject: { type: 'order', id: orderId },
		after: { inFull, words, refundMinor: back }
	});
}

export interface OrderFilter {
	/** Part of the name, address or reference. */
	search?: string;
	slotId?: string;
	/** The last row already seen. */
	before?: string;
	most: number;
}

/** Orders, newest first; those that expired unpaid are left out unless one is searched for. */
export async function listOrders(tx: TenantTx, { search, slotId, before, most }: OrderFilter) {
	demand(tx, 'orders.read');
	const part = search ? `%${search.replaceAll(/[\\%_]/g, (sign) => `\\${sign}`)}%` : null;
	const rows = await heads(tx)
		.where(
			and(
				eq(order.operatorId, tx.operatorId),
				part
					? or(
							ilike(order.visitorName, part),
							ilike(order.visitorEmail, part),
							ilike(order.reference, part)
						)
					: sql`${order.status} <> 'expired'`,
				...(slotId ? [eq(order.slotId, slotId)] : []),
				...(before ? [lt(order.id, before)] : [])
			)
		)
		.orderBy(desc(order.id))
		.limit(most + 1);
	const page = rows.slice(0, most);
	return { rows: page, next: rows.length > most ? (page.at(-1)?.id ?? null) : null };
}
