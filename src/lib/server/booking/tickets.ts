import { and, asc, eq, ne } from 'drizzle-orm';
import { orderLine, ticket } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { newTicketCode } from './codes';

/** One ticket for each place of an order, in its transaction. */
export async function issueTickets(
	tx: TenantTx,
	{ id: orderId, slotId }: { id: string; slotId: string }
): Promise<void> {
	const lines = await tx.sql.query.orderLine.findMany({
		where: and(eq(orderLine.operatorId, tx.operatorId), eq(orderLine.orderId, orderId)),
		orderBy: orderLine.id
	});
	await tx.sql.insert(ticket).values(
		lines.flatMap((line) =>
			Array.from({ length: line.quantity }, () => ({
				operatorId: tx.operatorId,
				orderId,
				orderLineId: line.id,
				slotId,
				code: newTicketCode()
			}))
		)
	);
}

/**
 * An order's tickets with the name of their price category, in the order of its lines.
 * @param moved those that gave way to tickets of another slot too
 */
export function listTickets(tx: TenantTx, orderId: string, { moved = false } = {}) {
	return tx.sql
		.select({
			id: ticket.id,
			code: ticket.code,
			status: ticket.status,
			usedAt: ticket.usedAt,
			name: orderLine.name
		})
		.from(ticket)
		.innerJoin(orderLine, eq(orderLine.id, ticket.orderLineId))
		.where(
			and(
				eq(ticket.operatorId, tx.operatorId),
				eq(ticket.orderId, orderId),
				...(moved ? [] : [ne(ticket.status, 'moved')])
			)
		)
		.orderBy(asc(orderLine.id), asc(ticket.id));
}
