import { and, eq } from 'drizzle-orm';
import { formatCount, formatDay, formatTime, zoneName } from '../../format';
import { formatMoney } from '../../money';
import { site, slot, zone } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { env } from '../env';
import { writeLetter } from '../mail/outbox';
import { readOperator } from '../operators/operators';
import { groupedCode } from './codes';
import { listTickets } from './tickets';
import { visitorPath } from './visitor-key';

interface LetterOrder {
	id: string;
	slotId: string;
	reference: string;
	visitorName: string;
	visitorEmail: string;
	places: number;
	currency: string;
	totalMinor: number;
}

/** When and where, in words, for letters. */
async function visitOf(tx: TenantTx, slotId: string) {
	const [found] = await tx.sql
		.select({
			localDate: slot.localDate,
			startsAt: slot.startsAt,
			endsAt: slot.endsAt,
			zone: zone.name,
			site: site.name,
			timeZone: site.timeZone,
			arrival: site.arrival
		})
		.from(slot)
		.innerJoin(zone, eq(zone.id, slot.zoneId))
		.innerJoin(site, eq(site.id, slot.siteId))
		.where(and(eq(slot.operatorId, tx.operatorId), eq(slot.id, slotId)));
	if (!found) throw new Error(`no slot ${slotId}`);
	const { startsAt, endsAt, timeZone } = found;
	const times = `${formatTime(startsAt, timeZone)} to ${formatTime(endsAt, timeZone)} ${zoneName(startsAt, timeZone)}`;
	return { ...found, day: formatDay(found.localDate), times };
}

/** The letter with the tickets, the receipt and the calendar entry. */
export async function writeTicketLetter(
	tx: TenantTx,
	order: LetterOrder,
	receiptId: string | null
): Promise<void> {
	const operator = await readOperator(tx);
	const visit = await visitOf(tx, order.slotId);
	const tickets = await listTickets(tx, order.id);
	await writeLetter(tx, {
		kind: 'tickets',
		to: order.visitorEmail,
		content: {
			subject: `Your tickets for ${visit.site}, ${visit.day}, ${formatTime(visit.startsAt, visit.timeZone)}`,
			greeting: `Dear ${order.visitorName},`,
			paragraphs: [
				`you have ${formatCount(order.places, 'place')} at ${visit.site}, ${visit.zone}:\n${visit.day}, ${visit.times}.`,
				'Please be at the zone a few minutes before: the bow keeps the sun’s time. Show these codes at the gate.',
				...(visit.arrival ? [visit.arrival] : []),
				'The ground can be wet and slippery. Do not look into the sun.'
			],
			codes: codesOf(tickets),
			action: { label: 'See or cancel the order', url: orderUrl(operator, order.id) },
			note: `Order ${order.reference}. If the weather does not hold, we write to this address and the money goes back by itself.`,
			from: operator.name
		},
		enclosures: [
			{ kind: 'tickets', orderId: order.id, ticketIds: tickets.map(({ id }) => id) },
			...(receiptId ? [{ kind: 'document' as const, documentId: receiptId }] : [])
		]
	});
}

function codesOf(tickets: Awaited<ReturnType<typeof listTickets>>) {
	return tickets.map((ticket) => ({
		contentId: `${ticket.id}@ticket`,
		label: ticket.name,
		code: groupedCode(ticket.code)
	}));
}

/**
 * Told to a visitor whose order went to another slot: when it was, when it is, and the new tickets.
 * @param order as it is now, in its new slot
 */
export async function writeMoveLetter(
	tx: TenantTx,
	order: LetterOrder,
	told: { fromSlotId: string; words: string; fullRefund: boolean }
): Promise<void> {
	const operator = await readOperator(tx);
	const before = await visitOf(tx, told.fromSlotId);
	const visit = await visitOf(tx, order.slotId);
	const tickets = await listTickets(tx, order.id);
	const back =
		order.totalMinor > 0
			? ` and ${formatMoney(order.totalMinor, order.currency)} goes back in full, whatever the terms of sale say`
			: '';
	await writeLetter(tx, {
		kind: 'moved',
		to: order.visitorEmail,
		content: {
			subject: `Moved: ${visit.site}, now ${visit.day}, ${formatTime(visit.startsAt, visit.timeZone)}`,
			greeting: `Dear ${order.visitorName},`,
			paragraphs: [
				`your visit to ${visit.site} on ${before.day}, ${before.times} is moved. You now have ${formatCount(order.places, 'place')} at ${visit.zone}:\n${visit.day}, ${visit.times}.`,
				...(told.words ? [told.words] : []),
				'The tickets that you had are no longer valid. Show these codes at the gate.',
				...(told.fullRefund
					? [
							`If the new time does not suit you, cancel before it begins,${back || ' by the link below'}.`
						]
					: []),
				...(visit.arrival ? [visit.arrival] : []),
				'The ground can be wet and slippery. Do not look into the sun.'
			],
			codes: codesOf(tickets),
			action: { label: 'See or cancel the order', url: orderUrl(operator, order.id) },
			note: `Order ${order.reference}. The price stays as you paid it. If the weather does not hold, we write to this address and the money goes back by itself.`,
			from: operator.name
		},
		enclosures: [{ kind: 'tickets', orderId: order.id, ticketIds: tickets.map(({ id }) => id) }]
	});
}

function orderUrl(operator: { id: string; slug: string }, orderId: string): string {
	return env().ORIGIN + visitorPath(operator, orderId);
}

/** Told to a visitor whose order was cancelled, by them or for them. */
export async function writeCancellationLetter(
	tx: TenantTx,
	order: LetterOrder,
	told: {
		reason: 'visitor' | 'called_off' | 'box_office';
		words: string | undefined;
		amountMinor: number;
		creditNoteId: string | null;
	}
): Promise<void> {
	const operator = await readOperator(tx);
	const visit = await visitOf(tx, order.slotId);
	const calledOff = told.reason === 'called_off';
	const money =
		told.amountMinor > 0
			? `${formatMoney(told.amountMinor, order.currency)} goes back to the card that paid. Banks take some days to show it.`
			: 'By the terms that it was sold under, nothing goes back.';
	await writeLetter(tx, {
		kind: calledOff ? 'called_off' : 'cancelled',
		to: order.visitorEmail,
		content: {
			subject: calledOff
				? `Called off: ${visit.site}, ${visit.day}, ${formatTime(visit.startsAt, visit.timeZone)}`
				: `Cancelled: your order ${order.reference}`,
			greeting: `Dear ${order.visitorName},`,
			paragraphs: [
				calledOff
					? `the visit on ${visit.day}, ${visit.times} at ${visit.site} is called off.`
					: `your order for ${visit.day}, ${visit.times} at ${visit.site} is cancelled.`,
				...(told.words ? [told.words] : []),
				...(order.totalMinor > 0 ? [money] : []),
				'The tickets are no longer valid.'
			],
			action: { label: 'See the order', url: orderUrl(operator, order.id) },
			note: `Order ${order.reference}, ${formatCount(order.places, 'place')}.`,
			from: operator.name
		},
		enclosures: told.creditNoteId ? [{ kind: 'document', documentId: told.creditNoteId }] : []
	});
}

/** Told to a visitor whose payment came when there was nothing left to sell. */
export async function writeMoneyBackLetter(
	tx: TenantTx,
	order: LetterOrder,
	told: { amountMinor: number; reason: 'no_places' | 'called_off' | 'visitor' }
): Promise<void> {
	const operator = await readOperator(tx);
	const visit = await visitOf(tx, order.slotId);
	const why = {
		no_places:
			'Your payment came after the time for which the places were kept, and they had gone to others.',
		called_off: 'Your payment came when the visit had just been called off.',
		visitor: 'Your payment came after you had cancelled the order.'
	}[told.reason];
	await writeLetter(tx, {
		kind: 'money_back',
		to: order.visitorEmail,
		content: {
			subject: `Your money goes back: order ${order.reference}`,
			greeting: `Dear ${order.visitorName},`,
			paragraphs: [
				why,
				`So you have no tickets for ${visit.day}, ${visit.times} at ${visit.site}, and ${formatMoney(told.amountMinor, order.currency)} goes back to the card that paid. Banks take some days to show it.`
			],
			action: { label: 'See the order', url: orderUrl(operator, order.id) },
			note: `Order ${order.reference}.`,
			from: operator.name
		}
	});
}
