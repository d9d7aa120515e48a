import { and, asc, eq, gte, lte, sql } from 'drizzle-orm';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { readTicketCode } from '../booking/codes';
import { order, orderLine, site, slot, ticket, zone } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';

const dayMs = 86_400_000;

/** Slots at the gate: those that end from two hours ago on and begin within a day. No money, no names. */
export function gateSlots(tx: TenantTx, now: Date) {
	demand(tx, 'gate.use');
	return tx.sql
		.select({
			id: slot.id,
			site: site.name,
			zone: zone.name,
			timeZone: site.timeZone,
			localDate: slot.localDate,
			startsAt: slot.startsAt,
			endsAt: slot.endsAt,
			status: slot.status,
			sold: slot.sold,
			entered: sql<number>`(select count(*)::int from ticket t where t.operator_id = ${slot.operatorId} and t.slot_id = ${slot.id} and t.status = 'used')`
		})
		.from(slot)
		.innerJoin(site, eq(site.id, slot.siteId))
		.innerJoin(zone, eq(zone.id, slot.zoneId))
		.where(
			and(
				eq(slot.operatorId, tx.operatorId),
				gte(slot.endsAt, new Date(now.getTime() - dayMs / 12)),
				lte(slot.startsAt, new Date(now.getTime() + dayMs)),
				// A slot withdrawn with nobody in it says nothing to a steward.
				sql`(${slot.status} <> 'called_off' or ${slot.sold} > 0 or exists (select 1 from weather_call_slot w where w.operator_id = ${slot.operatorId} and w.slot_id = ${slot.id}))`
			)
		)
		.orderBy(asc(slot.startsAt))
		.limit(100);
}

export type GateSlot = Awaited<ReturnType<typeof gateSlots>>[number];

/** What a steward is told of a code. */
export type Admission =
	| { answer: 'let_in'; name: string }
	| { answer: 'used'; name: string; usedAt: Date }
	| {
			answer: 'other_slot';
			name: string;
			startsAt: Date;
			localDate: string;
			zone: string;
			timeZone: string;
	  }
	/** It was moved: a new ticket is for this slot. */
	| {
			answer: 'moved';
			name: string;
			startsAt: Date;
			localDate: string;
			zone: string;
			timeZone: string;
	  }
	| { answer: 'void'; calledOff: boolean }
	| { answer: 'unknown' };

/**
 * Takes a code at the gate of a slot. A valid ticket of that slot is marked as used in the same
 * statement that looks at it, so that of two gates only one lets it in.
 * @param typed as scanned or typed
 * @throws Refusal when the slot is over or not there
 */
export async function admit(
	tx: TenantTx,
	{ slotId, typed }: { slotId: string; typed: string },
	now: Date
): Promise<Admission> {
	demand(tx, 'gate.use');
	const at = await tx.sql.query.slot.findFirst({
		where: and(eq(slot.operatorId, tx.operatorId), eq(slot.id, slotId))
	});
	if (!at) throw new Refusal('not_found', 'There is no such slot.');
	const code = readTicketCode(typed);
	if (!code) return { answer: 'unknown' };
	const [letIn] = await tx.sql
		.update(ticket)
		.set({
			status: 'used',
			usedAt: now,
			usedBy: tx.actor.kind === 'member' ? tx.actor.userId : null
		})
		.where(
			and(
				eq(ticket.operatorId, tx.operatorId),
				eq(ticket.code, code),
				eq(ticket.slotId, slotId),
				eq(ticket.status, 'valid')
			)
		)
		.returning({ id: ticket.id });
	const found = await findTicket(tx, code);
	if (!found) return { answer: 'unknown' };
	if (letIn) {
		await addToTrail(tx, {
			action: 'ticket.used',
			subject: { type: 'ticket', id: letIn.id },
			after: { slotId }
		});
		return { answer: 'let_in', name: found.name };
	}
	if (found.status === 'used' && found.usedAt) {
		return { answer: 'used', name: found.name, usedAt: found.usedAt };
	}
	const { name, startsAt, localDate, zone: zoneName, timeZone } = found;
	const there = { name, startsAt, localDate, zone: zoneName, timeZone };
	if (found.status === 'moved' && found.orderStatus === 'paid')
		return { answer: 'moved', ...there };
	if (found.status !== 'valid') {
		return { answer: 'void', calledOff: found.slotStatus === 'called_off' };
	}
	return { answer: 'other_slot', ...there };
}

/** A ticket with the slot that its order stands in now: its own, or the one that it was moved to. */
async function findTicket(tx: TenantTx, code: string) {
	const [found] = await tx.sql
		.select({
			status: ticket.status,
			usedAt: ticket.usedAt,
			name: orderLine.name,
			orderStatus: order.status,
			slotStatus: slot.status,
			startsAt: slot.startsAt,
			localDate: slot.localDate,
			zone: zone.name,
			timeZone: site.timeZone
		})
		.from(ticket)
		.innerJoin(orderLine, eq(orderLine.id, ticket.orderLineId))
		.innerJoin(order, eq(order.id, ticket.orderId))
		.innerJoin(slot, eq(slot.id, order.slotId))
		.innerJoin(zone, eq(zone.id, slot.zoneId))
		.innerJoin(site, eq(site.id, slot.siteId))
		.where(and(eq(ticket.operatorId, tx.operatorId), eq(ticket.code, code)));
	return found ?? null;
}
