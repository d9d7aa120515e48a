import { and, asc, eq, gt, inArray, ne, sql } from 'drizzle-orm';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { violates } from '../db/errors';
import { order, orderMove, site, slot, ticket, zone } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { writeMoveLetter } from './letters';
import { listMoves, wasMovedByOperator } from './moves-of-order';
import { releaseLapsedHolds } from './reserve';
import { lockOrder, type Order } from './settle';
import { issueTickets } from './tickets';

export interface OrderMoveWish {
	/** The form's own id for the move: the same form sent twice is one move. */
	moveId: string;
	/** Moved by the operator's wish, the visitor may cancel for all of the money until it begins. */
	wishedBy: 'visitor' | 'operator';
	/** Read by the visitor in the letter; may be empty. */
	words: string;
	/** The decision on the whole slot that this is part of, and who took it. */
	slotMove?: { id: string; decidedByName: string };
}

/**
 * Moves a paid order to another coming, open slot of its site, in one transaction: its tickets become
 * moved, new ones are issued, and a letter brings them. Prices stay as they were sold; no money moves.
 * @returns false when this very move was done before
 * @throws Refusal when the order can not go, or the slot can not take it
 */
export async function moveOrder(
	tx: TenantTx,
	orderId: string,
	targetSlotId: string,
	wish: OrderMoveWish,
	now: Date
): Promise<boolean> {
	demand(tx, 'orders.move');
	const found = await lockOrder(tx, orderId);
	if (!found) throw new Refusal('not_found', 'There is no such order.');
	if (await wasDone(tx, orderId, wish.moveId)) return false;
	if (found.status !== 'paid') throw new Refusal('conflict', whyNot[found.status]);
	if (found.slotId === targetSlotId) {
		throw new Refusal('conflict', 'The order is in this slot already.', 'slotId');
	}
	const both = [found.slotId, targetSlotId];
	const target = takesMoves(await readSlots(tx, both), found.slotId, targetSlotId, now);
	await giveUpTickets(tx, found);
	await tx.sql.insert(orderMove).values({
		id: wish.moveId,
		operatorId: tx.operatorId,
		orderId,
		fromSlotId: found.slotId,
		toSlotId: target.id,
		wishedBy: wish.wishedBy,
		words: wish.words,
		slotMoveId: wish.slotMove?.id ?? null,
		movedByName: wish.slotMove?.decidedByName ?? tx.actor.name
	});
	const there = { ...found, slotId: target.id };
	await issueTickets(tx, there);
	await writeMoveLetter(tx, there, {
		fromSlotId: found.slotId,
		words: wish.words,
		fullRefund: wasMovedByOperator(await listMoves(tx, orderId))
	});
	await addToTrail(tx, {
		action: 'order.moved',
		subject: { type: 'order', id: orderId },
		before: { slotId: found.slotId },
		after: {
			slotId: target.id,
			startsAt: target.startsAt.toISOString(),
			places: found.places,
			wishedBy: wish.wishedBy,
			words: wish.words,
			...(wish.slotMove ? { slotMoveId: wish.slotMove.id } : {})
		}
	});
	// Last, because it locks the slots for everybody else who buys there; looked at again under the lock.
	takesMoves(await lockSlots(tx, both), found.slotId, targetSlotId, now);
	await releaseLapsedHolds(tx, target.id, now);
	await toSlot(tx, orderId, target.id);
	return true;
}

const whyNot = {
	pending: 'The order is not paid yet.',
	expired: 'The order was not paid in time: there is nothing to move.',
	cancelled: 'The order is cancelled: there is nothing to move.'
} as const;

async function wasDone(tx: TenantTx, orderId: string, moveId: string): Promise<boolean> {
	const before = await tx.sql.query.orderMove.findFirst({
		columns: { orderId: true },
		where: and(eq(orderMove.operatorId, tx.operatorId), eq(orderMove.id, moveId))
	});
	if (before && before.orderId !== orderId) {
		throw new Refusal('conflict', 'This form was used for another order. Open the page again.');
	}
	return before !== undefined;
}

async function giveUpTickets(tx: TenantTx, found: Order): Promise<void> {
	const given = await tx.sql
		.update(ticket)
		.set({ status: 'moved' })
		.where(
			and(
				eq(ticket.operatorId, tx.operatorId),
				eq(ticket.orderId, found.id),
				eq(ticket.status, 'valid')
			)
		)
		.returning({ id: ticket.id });
	if (given.length !== found.places) {
		throw new Refusal('conflict', 'A ticket of this order has been used: it can not be moved.');
	}
}

/**
 * Locks slots against everybody who counts places there. Always by this, where one transaction needs
 * more than one: in the order of their ids, so that two who need the same never wait for each other.
 */
export function lockSlots(tx: TenantTx, slotIds: string[]) {
	return tx.sql
		.select()
		.from(slot)
		.where(and(eq(slot.operatorId, tx.operatorId), inArray(slot.id, slotIds)))
		.orderBy(asc(slot.id))
		.for('no key update');
}

function readSlots(tx: TenantTx, slotIds: string[]) {
	return tx.sql.query.slot.findMany({
		where: and(eq(slot.operatorId, tx.operatorId), inArray(slot.id, slotIds))
	});
}

/** The slot to go to. @throws Refusal when it takes nobody from the other one */
export function takesMoves(
	slots: (typeof slot.$inferSelect)[],
	from: string,
	to: string,
	now: Date
) {
	const source = slots.find(({ id }) => id === from);
	const target = slots.find(({ id }) => id === to);
	if (!source || !target || source.siteId !== target.siteId) {
		throw new Refusal('not_found', 'There is no such slot at this site.', 'slotId');
	}
	if (target.status === 'called_off') {
		throw new Refusal('conflict', 'That slot is called off. Choose another.', 'slotId');
	}
	if (target.status !== 'open') {
		throw new Refusal('conflict', 'That slot is paused. Choose another.', 'slotId');
	}
	if (target.startsAt <= now) {
		throw new Refusal('conflict', 'That slot has begun. Choose a coming one.', 'slotId');
	}
	return target;
}

async function toSlot(tx: TenantTx, orderId: string, slotId: string): Promise<void> {
	try {
		await tx.sql
			.update(order)
			.set({ slotId })
			.where(and(eq(order.operatorId, tx.operatorId), eq(order.id, orderId)));
	} catch (error) {
		if (violates(error, 'slot_places')) {
			throw new Refusal('conflict', 'That slot has too few places left. Choose another.', 'slotId');
		}
		throw error;
	}
}

export interface MoveTarget {
	id: string;
	zone: string;
	localDate: string;
	startsAt: Date;
	endsAt: Date;
	timeZone: string;
	placesLeft: number;
}

/** Most slots that are offered at once, the next ones first. */
const mostTargets = 300;

/**
 * Slots of a site that can take so many places: coming, open, with room, in order of time.
 * @param besides the slot to go from
 */
export function listMoveTargets(
	tx: TenantTx,
	{ siteId, besides, places }: { siteId: string; besides: string; places: number },
	now: Date
): Promise<MoveTarget[]> {
	const placesLeft = sql<number>`${slot.capacity} - ${slot.held} - ${slot.sold}`;
	return tx.sql
		.select({
			id: slot.id,
			zone: zone.name,
			localDate: slot.localDate,
			startsAt: slot.startsAt,
			endsAt: slot.endsAt,
			timeZone: site.timeZone,
			placesLeft
		})
		.from(slot)
		.innerJoin(zone, eq(zone.id, slot.zoneId))
		.innerJoin(site, eq(site.id, slot.siteId))
		.where(
			and(
				eq(slot.operatorId, tx.operatorId),
				eq(slot.siteId, siteId),
				eq(slot.status, 'open'),
				ne(slot.id, besides),
				gt(slot.startsAt, now),
				sql`${placesLeft} >= ${places}`
			)
		)
		.orderBy(asc(slot.startsAt), asc(slot.id))
		.limit(mostTargets);
}
