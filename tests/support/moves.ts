import { eq } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { expect } from 'vitest';
import { moveOrder } from '../../src/lib/server/booking/move.ts';
import { orderMove, refund, ticket } from '../../src/lib/server/db/schema/index.ts';
import { adminQuery } from './database.ts';
import type { Shop } from './shop.ts';

export interface MoveWish {
	wishedBy?: 'visitor' | 'operator';
	words?: string;
	moveId?: string;
	now?: Date;
}

/** Moves an order as the owner, by the operator's wish unless told otherwise. */
export function move(
	shop: Shop,
	orderId: string,
	slotId: string,
	{ wishedBy = 'operator', words = '', moveId = uuidv7(), now = new Date() }: MoveWish = {}
): Promise<boolean> {
	return shop.asOwner((tx) => moveOrder(tx, orderId, slotId, { moveId, wishedBy, words }, now));
}

export const ticketsOf = (shop: Shop, orderId: string) =>
	shop.asOwner((tx) => tx.sql.query.ticket.findMany({ where: eq(ticket.orderId, orderId) }));

export const movesOf = (shop: Shop, orderId: string) =>
	shop.asOwner((tx) => tx.sql.query.orderMove.findMany({ where: eq(orderMove.orderId, orderId) }));

export const refundsOf = (shop: Shop, orderId: string) =>
	shop.asOwner((tx) => tx.sql.query.refund.findMany({ where: eq(refund.orderId, orderId) }));

/** Every slot's counters are what its orders say, and every paid order has its tickets there. */
export async function expectSound(shop: Shop): Promise<void> {
	const wrong = await adminQuery(
		`select s.id from slot s where s.operator_id = $1 and (s.sold, s.held) is distinct from (
			(select coalesce(sum(places), 0) from "order" o where o.slot_id = s.id and o.status = 'paid'),
			(select coalesce(sum(places), 0) from "order" o where o.slot_id = s.id and o.status = 'pending'))
		union all select o.id from "order" o where o.operator_id = $1 and o.status = 'paid' and o.places <> (
			select count(*) from ticket t where t.order_id = o.id and t.slot_id = o.slot_id and t.status in ('valid', 'used'))
		union all select o.id from "order" o where o.operator_id = $1 and exists (
			select 1 from ticket t where t.order_id = o.id and t.slot_id <> o.slot_id and t.status in ('valid', 'used'))`,
		[shop.operatorId]
	);
	expect(wrong).toEqual([]);
}
