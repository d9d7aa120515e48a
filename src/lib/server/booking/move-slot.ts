import { and, asc, desc, eq, inArray, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import { v7 as uuidv7 } from 'uuid';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { order, site, slot, slotMove, slotMoveOrder, zone } from '../db/schema';
import { inTenant, withSavepoint, type TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { addJob } from '../jobs/add';
import type { TaskPayloads } from '../jobs/tasks';
import { lockSlots, moveOrder, takesMoves } from './move';
import { releaseLapsedHolds } from './reserve';
import { lockOrder } from './settle';

const origin = { actor: { kind: 'worker', name: 'moves' } } as const;

/** How long after the end of a hold its order is looked at again. */
const afterHoldMs = 30_000;

/**
 * Begins to move everybody of a slot to another: from the commit on nobody can buy in the old one, and
 * a job for each order moves it as the operator's wish.
 * @returns the move's id
 * @throws Refusal when the other slot can not take them all
 */
export async function startSlotMove(
	tx: TenantTx,
	wanted: { fromSlotId: string; toSlotId: string; words: string },
	now: Date
): Promise<string> {
	demand(tx, 'conflicts.decide');
	if (tx.actor.kind !== 'member') throw new Error('a member decides on a move');
	const both = [wanted.fromSlotId, wanted.toSlotId];
	await lockSlots(tx, both);
	for (const id of both) await releaseLapsedHolds(tx, id, now);
	// Read again: what has lapsed has just given its places back.
	const slots = await lockSlots(tx, both);
	const target = takesMoves(slots, wanted.fromSlotId, wanted.toSlotId, now);
	const source = slots.find(({ id }) => id === wanted.fromSlotId)!;
	await demandMovable(tx, source, target, now);
	await tx.sql
		.update(slot)
		.set({ status: 'paused' })
		.where(and(eq(slot.operatorId, tx.operatorId), eq(slot.id, source.id)));
	const [made] = await tx.sql
		.insert(slotMove)
		.values({
			operatorId: tx.operatorId,
			...wanted,
			decidedBy: tx.actor.userId,
			decidedByName: tx.actor.name
		})
		.returning({ id: slotMove.id });
	const slotMoveId = made!.id;
	const orders = await tx.sql
		.select({ id: order.id })
		.from(order)
		.where(
			and(
				eq(order.operatorId, tx.operatorId),
				eq(order.slotId, source.id),
				inArray(order.status, ['pending', 'paid'])
			)
		)
		.orderBy(asc(order.createdAt));
	await tx.sql
		.insert(slotMoveOrder)
		.values(orders.map(({ id }) => ({ operatorId: tx.operatorId, slotMoveId, orderId: id })));
	for (const { id: orderId } of orders) {
		await addJob(tx, 'move_slot_order', { operatorId: tx.operatorId, orderId, slotMoveId });
	}
	await addToTrail(tx, {
		action: 'slot.moving',
		subject: { type: 'slot', id: source.id },
		before: { slotId: source.id, startsAt: source.startsAt.toISOString() },
		after: {
			slotId: target.id,
			startsAt: target.startsAt.toISOString(),
			orders: orders.length,
			places: source.sold + source.held,
			words: wanted.words
		}
	});
	return slotMoveId;
}

type SlotRow = typeof slot.$inferSelect;

async function demandMovable(
	tx: TenantTx,
	source: SlotRow,
	target: SlotRow,
	now: Date
): Promise<void> {
	if (source.id === target.id) {
		throw new Refusal('conflict', 'A slot can not be moved to itself.');
	}
	if (source.status === 'called_off') {
		throw new Refusal('conflict', 'The slot is called off: there is nothing to move.');
	}
	if (source.startsAt <= now) throw new Refusal('conflict', 'The slot has begun.');
	if ((await movesUnderWay(tx, { slotIds: [source.id] })).has(source.id)) {
		throw new Refusal('conflict', 'The slot is being moved already.');
	}
	const places = source.sold + source.held;
	if (places === 0) throw new Refusal('conflict', 'Nobody is in the slot any more.');
	const coming = (await placesComing(tx, [target.id])).get(target.id) ?? 0;
	if (target.capacity - target.held - target.sold - coming < places) {
		throw new Refusal('conflict', 'The other slot has too few places left. Choose another.');
	}
}

/** Moves that are not done yet, by the slot that they lead away from: of some slots, or of a site. */
export async function movesUnderWay(
	tx: TenantTx,
	of: { slotIds: string[] } | { siteId: string }
): Promise<Map<string, string>> {
	const rows = await tx.sql
		.selectDistinct({ slotId: slotMove.fromSlotId, id: slotMove.id })
		.from(slotMove)
		.innerJoin(slotMoveOrder, eq(slotMoveOrder.slotMoveId, slotMove.id))
		.innerJoin(slot, eq(slot.id, slotMove.fromSlotId))
		.where(
			and(
				eq(slotMove.operatorId, tx.operatorId),
				'siteId' in of ? eq(slot.siteId, of.siteId) : inArray(slot.id, of.slotIds),
				eq(slotMoveOrder.state, 'waiting')
			)
		);
	return new Map(rows.map(({ slotId, id }) => [slotId, id]));
}

/** Places that moves under way will still bring, by the slot that they lead to. */
export async function placesComing(tx: TenantTx, slotIds: string[]): Promise<Map<string, number>> {
	const rows = await tx.sql
		.select({ slotId: slotMove.toSlotId, places: sql<number>`sum(${order.places})::int` })
		.from(slotMove)
		.innerJoin(slotMoveOrder, eq(slotMoveOrder.slotMoveId, slotMove.id))
		.innerJoin(order, eq(order.id, slotMoveOrder.orderId))
		.where(
			and(
				eq(slotMove.operatorId, tx.operatorId),
				inArray(slotMove.toSlotId, slotIds),
				eq(slotMoveOrder.state, 'waiting')
			)
		)
		.groupBy(slotMove.toSlotId);
	return new Map(rows.map(({ slotId, places }) => [slotId, places]));
}

/**
 * The job for one order of a slot that is being moved; run again, it finds its work done. An order that
 * can not go is named with the reason and left as it was.
 */
export async function moveSlotOrder({
	operatorId,
	orderId,
	slotMoveId
}: TaskPayloads['move_slot_order']): Promise<void> {
	await inTenant(operatorId, origin, async (tx) => {
		const now = new Date();
		const found = await lockOrder(tx, orderId);
		const move = await tx.sql.query.slotMove.findFirst({
			where: and(eq(slotMove.operatorId, operatorId), eq(slotMove.id, slotMoveId))
		});
		if (!found || !move) return;
		const finish = (state: 'moved' | 'failed' | 'gone', fault: string | null = null) =>
			tx.sql
				.update(slotMoveOrder)
				.set({ state, fault, doneAt: now })
				.where(
					and(
						eq(slotMoveOrder.operatorId, operatorId),
						eq(slotMoveOrder.slotMoveId, slotMoveId),
						eq(slotMoveOrder.orderId, orderId),
						eq(slotMoveOrder.state, 'waiting')
					)
				);
		const over = found.status === 'cancelled' || found.status === 'expired';
		if (found.slotId !== move.fromSlotId || over) {
			await finish('gone');
			return;
		}
		if (found.status === 'pending') {
			// Who is just paying pays for the old slot, and is moved like the others afterwards.
			const runAt = new Date(Math.max(found.holdUntil.getTime(), now.getTime()) + afterHoldMs);
			await addJob(tx, 'move_slot_order', { operatorId, orderId, slotMoveId }, { runAt });
			return;
		}
		const { words, decidedByName } = move;
		const slotMoveOf = { id: slotMoveId, decidedByName };
		const wish = { moveId: uuidv7(), wishedBy: 'operator', words, slotMove: slotMoveOf } as const;
		try {
			await withSavepoint(tx, () => moveOrder(tx, orderId, move.toSlotId, wish, now));
			await finish('moved');
		} catch (error) {
			if (!(error instanceof Refusal)) throw error;
			await finish('failed', error.message);
		}
	});
}

const fromSlot = alias(slot, 'from_slot');
const toSlot = alias(slot, 'to_slot');
const toZone = alias(zone, 'to_zone');

function heads(tx: TenantTx) {
	return tx.sql
		.select({
			id: slotMove.id,
			words: slotMove.words,
			decidedByName: slotMove.decidedByName,
			createdAt: slotMove.createdAt,
			fromDate: fromSlot.localDate,
			fromStartsAt: fromSlot.startsAt,
			fromZone: zone.name,
			toDate: toSlot.localDate,
			toStartsAt: toSlot.startsAt,
			toZone: toZone.name,
			site: site.name,
			siteSlug: site.slug,
			timeZone: site.timeZone
		})
		.from(slotMove)
		.innerJoin(fromSlot, eq(fromSlot.id, slotMove.fromSlotId))
		.innerJoin(toSlot, eq(toSlot.id, slotMove.toSlotId))
		.innerJoin(zone, eq(zone.id, fromSlot.zoneId))
		.innerJoin(toZone, eq(toZone.id, toSlot.zoneId))
		.innerJoin(site, eq(site.id, fromSlot.siteId))
		.$dynamic();
}

/** A slot's move with its orders, row by row, and what became of each. @throws Refusal (not_found) */
export async function demandSlotMove(tx: TenantTx, id: string) {
	demand(tx, 'orders.read');
	const [move] = await heads(tx).where(
		and(eq(slotMove.operatorId, tx.operatorId), eq(slotMove.id, id))
	);
	if (!move) throw new Refusal('not_found', 'There is no such move.');
	const rows = await tx.sql
		.select({
			orderId: order.id,
			reference: order.reference,
			visitorName: order.visitorName,
			places: order.places,
			state: slotMoveOrder.state,
			fault: slotMoveOrder.fault
		})
		.from(slotMoveOrder)
		.innerJoin(order, eq(order.id, slotMoveOrder.orderId))
		.where(and(eq(slotMoveOrder.operatorId, tx.operatorId), eq(slotMoveOrder.slotMoveId, id)))
		.orderBy(asc(order.createdAt), asc(order.id));
	return { ...move, rows };
}

/** The newest moves of a site's slots, with how many orders are in each state. */
export function listSlotMoves(tx: TenantTx, siteId: string, most = 20) {
	demand(tx, 'orders.read');
	const count = (state: string) =>
		sql<number>`(select count(*)::int from slot_move_order r where r.operator_id = ${slotMove.operatorId} and r.slot_move_id = ${slotMove.id} and r.state = ${state})`;
	return tx.sql
		.select({
			id: slotMove.id,
			fromSlotId: slotMove.fromSlotId,
			decidedByName: slotMove.decidedByName,
			createdAt: slotMove.createdAt,
			fromDate: fromSlot.localDate,
			fromStartsAt: fromSlot.startsAt,
			toDate: toSlot.localDate,
			toStartsAt: toSlot.startsAt,
			waiting: count('waiting'),
			moved: count('moved'),
			failed: count('failed')
		})
		.from(slotMove)
		.innerJoin(fromSlot, eq(fromSlot.id, slotMove.fromSlotId))
		.innerJoin(toSlot, eq(toSlot.id, slotMove.toSlotId))
		.where(and(eq(slotMove.operatorId, tx.operatorId), eq(fromSlot.siteId, siteId)))
		.orderBy(desc(slotMove.createdAt), desc(slotMove.id))
		.limit(most);
}
