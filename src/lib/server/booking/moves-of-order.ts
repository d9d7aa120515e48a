import { and, asc, eq } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import { orderMove, slot } from '../db/schema';
import type { TenantTx } from '../db/transaction';

const fromSlot = alias(slot, 'from_slot');
const toSlot = alias(slot, 'to_slot');

/** The moves of an order, first to last, with when it was and when it went to. */
export function listMoves(tx: TenantTx, orderId: string) {
	return tx.sql
		.select({
			id: orderMove.id,
			wishedBy: orderMove.wishedBy,
			words: orderMove.words,
			movedByName: orderMove.movedByName,
			createdAt: orderMove.createdAt,
			fromProgrammeId: fromSlot.programmeId,
			fromDate: fromSlot.localDate,
			fromStartsAt: fromSlot.startsAt,
			toDate: toSlot.localDate,
			toStartsAt: toSlot.startsAt
		})
		.from(orderMove)
		.innerJoin(fromSlot, eq(fromSlot.id, orderMove.fromSlotId))
		.innerJoin(toSlot, eq(toSlot.id, orderMove.toSlotId))
		.where(and(eq(orderMove.operatorId, tx.operatorId), eq(orderMove.orderId, orderId)))
		.orderBy(asc(orderMove.createdAt), asc(orderMove.id));
}

/**
 * Whether the operator once wished for another time. The right to all of the money that comes with it
 * stays when the visitor then chose a better one.
 */
export function wasMovedByOperator(moves: { wishedBy: 'visitor' | 'operator' }[]): boolean {
	return moves.some(({ wishedBy }) => wishedBy === 'operator');
}
