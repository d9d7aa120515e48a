import { and, asc, desc, eq, gte, inArray, or, sql } from 'drizzle-orm';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import {
	order,
	orderMove,
	payment,
	refund,
	site,
	slot,
	weatherCall,
	weatherCallSlot,
	zone
} from '../db/schema';
import { inTenant, type TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { addJob } from '../jobs/add';
import type { TaskPayloads } from '../jobs/tasks';
import { cancelPaidOrder, cancelPendingOrder } from '../booking/cancel';
import { lockSlots } from '../booking/move';
import { lockOrder } from '../booking/settle';

const origin = { actor: { kind: 'worker', name: 'weather calls' } } as const;

/** What calling off would do, in numbers. */
export async function weighCallOff(tx: TenantTx, slotIds: string[]) {
	demand(tx, 'weather.decide');
	const slots = await tx.sql
		.select({
			id: slot.id,
			siteId: slot.siteId,
			site: site.name,
			zone: zone.name,
			timeZone: site.timeZone,
			localDate: slot.localDate,
			startsAt: slot.startsAt,
			endsAt: slot.endsAt,
			status: slot.status,
			sold: slot.sold,
			currency: site.currency
		})
		.from(slot)
		.innerJoin(site, eq(site.id, slot.siteId))
		.innerJoin(zone, eq(zone.id, slot.zoneId))
		.where(and(eq(slot.operatorId, tx.operatorId), inArray(slot.id, slotIds)))
		.orderBy(asc(slot.startsAt));
	const [sums] = await tx.sql
		.select({
			orders: sql<number>`count(*)::int`,
			places: sql<number>`coalesce(sum(${order.places}), 0)::int`,
			// What came in, less what goes back already.
			amountMinor: sql<number>`coalesce(sum(${payment.amountMinor}), 0)::bigint::float8`
		})
		.from(order)
		.leftJoin(payment, eq(payment.orderId, order.id))
		.where(
			and(
				eq(order.operatorId, tx.operatorId),
				inArray(order.slotId, slotIds),
				eq(order.status, 'paid')
			)
		);
	return {
		slots,
		orders: sums?.orders ?? 0,
		places: sums?.places ?? 0,
		amountMinor: sums?.amountMinor ?? 0
	};
}

/**
 * Calls slots off: from the commit on nobody can buy, and a job for each order voids its tickets,
 * gives the money back, issues the credit note and writes to the visitor. The orders themselves are
 * not touched here, so that this never waits for a visitor who is paying.
 * @returns the call's id
 */
export async function callOff(
	tx: TenantTx,
	{ slotIds, reason }: { slotIds: string[]; reason: string },
	now: Date
): Promise<string> {
	demand(tx, 'weather.decide');
	if (tx.actor.kind !== 'member') throw new Error('a member decides on the weather');
	const { slots, ...sums } = await weighCallOff(tx, slotIds);
	const siteId = slots[0]?.siteId;
	if (!siteId || slots.length !== new Set(slotIds).size) {
		throw new Refusal('not_found', 'A slot of these is not there any more.');
	}
	if (slots.some((one) => one.siteId !== siteId)) {
		throw new Refusal('invalid', 'Call off the slots of one site at a time.');
	}
	if (slots.some((one) => one.endsAt <= now)) {
		throw new Refusal('conflict', 'A slot of these is over.');
	}
	await lockSlots(tx, slotIds);
	const called = await tx.sql
		.update(slot)
		.set({ status: 'called_off' })
		.where(
			and(
				eq(slot.operatorId, tx.operatorId),
				inArray(slot.id, slotIds),
				inArray(slot.status, ['open', 'paused'])
			)
		)
		.returning({ id: slot.id });
	if (called.length !== slots.length) {
		throw new Refusal('conflict', 'A slot of these was called off already.');
	}
	const [call] = await tx.sql
		.insert(weatherCall)
		.values({
			operatorId: tx.operatorId,
			siteId,
			decision: 'call_off',
			reason,
			decidedBy: tx.actor.userId,
			decidedByName: tx.actor.name
		})
		.returning({ id: weatherCall.id });
	const weatherCallId = call!.id;
	await tx.sql
		.insert(weatherCallSlot)
		.values(slotIds.map((slotId) => ({ operatorId: tx.operatorId, weatherCallId, slotId })));
	const orders = await tx.sql
		.select({ id: order.id })
		.from(order)
		.where(
			and(
				eq(order.operatorId, tx.operatorId),
				inArray(order.slotId, slotIds),
				inArray(order.status, ['pending', 'paid'])
			)
		);
	for (const { id: orderId } of orders) {
		await addJob(tx, 'call_off_order', { operatorId: tx.operatorId, orderId, weatherCallId });
	}
	await addToTrail(tx, {
		action: 'slots.called_off',
		subject: { type: 'weather_call', id: weatherCallId },
		after: { slots: slotIds, reason, ...sums }
	});
	return weatherCallId;
}

/** The job for one order of a called-off slot; run again, it finds its work done. */
export async function callOffOrder({
	operatorId,
	orderId,
	weatherCallId
}: TaskPayloads['call_off_order']): Promise<void> {
	await inTenant(operatorId, origin, async (tx) => {
		const call = await tx.sql.query.weatherCall.findFirst({
			where: and(eq(weatherCall.operatorId, operatorId), eq(weatherCall.id, weatherCallId))
		});
		if (!call) return;
		const now = new Date();
		const found = await lockOrder(tx, orderId);
		// Moved meanwhile to a slot that takes place: it keeps its tickets there.
		if (!found || !(await isCalledOff(tx, weatherCallId, found.slotId))) return;
		// A pending one first: it may become paid only before it is looked at, never after.
		if (await cancelPendingOrder(tx, orderId, 'called_off', now)) return;
		await cancelPaidOrder(
			tx,
			orderId,
			{ reason: 'called_off', percent: 100, words: call.reason, weatherCallId },
			now
		);
	});
}

async function isCalledOff(tx: TenantTx, weatherCallId: string, slotId: string): Promise<boolean> {
	const found = await tx.sql.query.weatherCallSlot.findFirst({
		columns: { id: true },
		where: and(
			eq(weatherCallSlot.operatorId, tx.operatorId),
			eq(weatherCallSlot.weatherCallId, weatherCallId),
			eq(weatherCallSlot.slotId, slotId)
		)
	});
	return found !== undefined;
}

/** A weather call with its slots. @throws Refusal (not_found) */
export async function demandCall(tx: TenantTx, id: string) {
	demand(tx, 'orders.read');
	const [call] = await tx.sql
		.select({
			id: weatherCall.id,
			reason: weatherCall.reason,
			decidedByName: weatherCall.decidedByName,
			createdAt: weatherCall.createdAt,
			site: site.name,
			timeZone: site.timeZone,
			currency: site.currency
		})
		.from(weatherCall)
		.innerJoin(site, eq(site.id, weatherCall.siteId))
		.where(and(eq(weatherCall.operatorId, tx.operatorId), eq(weatherCall.id, id)));
	if (!call) throw new Refusal('not_found', 'There is no such weather call.');
	const slots = await tx.sql
		.select({
			id: slot.id,
			localDate: slot.localDate,
			startsAt: slot.startsAt,
			endsAt: slot.endsAt
		})
		.from(weatherCallSlot)
		.innerJoin(slot, eq(slot.id, weatherCallSlot.slotId))
		.where(
			and(eq(weatherCallSlot.operatorId, tx.operatorId), eq(weatherCallSlot.weatherCallId, id))
		)
		.orderBy(asc(slot.startsAt));
	return { ...call, slots };
}

/** The newest calls, for the weather page. */
export function listCalls(tx: TenantTx, most = 20) {
	demand(tx, 'orders.read');
	return tx.sql
		.select({
			id: weatherCall.id,
			reason: weatherCall.reason,
			decidedByName: weatherCall.decidedByName,
			createdAt: weatherCall.createdAt,
			site: site.name,
			timeZone: site.timeZone,
			slots: sql<number>`(select count(*)::int from weather_call_slot s where s.operator_id = ${weatherCall.operatorId} and s.weather_call_id = ${weatherCall.id})`
		})
		.from(weatherCall)
		.innerJoin(site, eq(site.id, weatherCall.siteId))
		.where(eq(weatherCall.operatorId, tx.operatorId))
		.orderBy(desc(weatherCall.createdAt))
		.limit(most);
}

/** How far a called-off order is. */
export type CallOffState = 'waiting' | 'moved' | 'refund_asked' | 'refund_sent' | 'done' | 'failed';

/**
 * Row by row, every order of the called-off slots that was or is paid, and what became of its money.
 * @param since orders that were moved elsewhere from this instant on are told too
 */
export async function callOffProgress(tx: TenantTx, slotIds: string[], since?: Date) {
	if (slotIds.length === 0) return [];
	const rows = await tx.sql
		.select({
			orderId: order.id,
			reference: order.reference,
			visitorName: order.visitorName,
			places: order.places,
			slotId: order.slotId,
			status: order.status,
			closedReason: order.closedReason,
			currency: order.currency,
			totalMinor: order.totalMinor,
			paidMinor: payment.amountMinor
		})
		.from(order)
		.leftJoin(payment, eq(payment.orderId, order.id))
		.where(
			and(
				eq(order.operatorId, tx.operatorId),
				or(
					inArray(order.slotId, slotIds),
					...(since ? [inArray(order.id, movedFrom(tx, slotIds, since))] : [])
				)
			)
		)
		.orderBy(asc(order.createdAt));
	const refunds = await tx.sql.query.refund.findMany({
		where: and(
			eq(refund.operatorId, tx.operatorId),
			inArray(
				refund.orderId,
				rows.length > 0 ? rows.map(({ orderId }) => orderId) : [tx.operatorId]
			)
		),
		orderBy: asc(refund.id)
	});
	return rows
		.filter(
			(row) =>
				!slotIds.includes(row.slotId) ||
				row.status === 'paid' ||
				row.paidMinor !== null ||
				row.closedReason === 'called_off'
		)
		.map((row) => {
			const last = refunds.filter(({ orderId }) => orderId === row.orderId).at(-1);
			const moved = !slotIds.includes(row.slotId);
			return {
				...row,
				refund: moved ? null : (last ?? null),
				state: moved ? ('moved' as const) : stateOf(row, last)
			};
		});
}

function movedFrom(tx: TenantTx, slotIds: string[], since: Date) {
	return tx.sql
		.select({ id: orderMove.orderId })
		.from(orderMove)
		.where(
			and(
				eq(orderMove.operatorId, tx.operatorId),
				inArray(orderMove.fromSlotId, slotIds),
				gte(orderMove.createdAt, since)
			)
		);
}

function stateOf(
	row: { status: string; paidMinor: number | null },
	last: typeof refund.$inferSelect | undefined
): CallOffState {
	if (row.status === 'paid' || row.status === 'pending') return 'waiting';
	if (row.paidMinor === null || row.paidMinor === 0) return 'done';
	if (!last) return 'done';
	return ({ asked: 'refund_asked', sent: 'refund_sent', done: 'done', failed: 'failed' } as const)[
		last.status
	];
}
