import ical, { ICalCalendarMethod, ICalEventStatus } from 'ical-generator';
import { and, eq } from 'drizzle-orm';
import QRCode from 'qrcode';
import { order, site, slot, zone } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { env } from '../env';
import { readOperator } from '../operators/operators';
import { listMoves } from './moves-of-order';
import { visitorPath } from './visitor-key';

/** A ticket's code as a QR picture. */
export function ticketQrPng(code: string): Promise<Buffer> {
	return QRCode.toBuffer(code, { errorCorrectionLevel: 'M', margin: 2, scale: 8 });
}

/** The same as an address that a page can show: dark on white, whatever the page's colours. */
export function ticketQrAddress(code: string): Promise<string> {
	return QRCode.toDataURL(code, { errorCorrectionLevel: 'M', margin: 2, scale: 8 });
}

/** The calendar entry of an order (RFC 5545), times in UTC; called off when the order is. */
export async function orderCalendar(tx: TenantTx, orderId: string): Promise<string | null> {
	const [found] = await tx.sql
		.select({
			status: order.status,
			reference: order.reference,
			places: order.places,
			startsAt: slot.startsAt,
			endsAt: slot.endsAt,
			zone: zone.name,
			site: site.name,
			latitudeDeg: site.latitudeDeg,
			longitudeDeg: site.longitudeDeg,
			createdAt: order.createdAt,
			closedAt: order.closedAt
		})
		.from(order)
		.innerJoin(slot, eq(slot.id, order.slotId))
		.innerJoin(zone, eq(zone.id, slot.zoneId))
		.innerJoin(site, eq(site.id, slot.siteId))
		.where(and(eq(order.operatorId, tx.operatorId), eq(order.id, orderId)));
	if (!found) return null;
	const moves = await listMoves(tx, orderId);
	const operator = await readOperator(tx);
	const live = found.status === 'paid';
	const calendar = ical({
		prodId: { company: 'Bowkeeper', product: 'Bowkeeper' },
		method: live ? ICalCalendarMethod.PUBLISH : ICalCalendarMethod.CANCEL
	});
	calendar.createEvent({
		id: `${orderId}@${new URL(env().ORIGIN).hostname}`,
		// Each move, and the end, follows on what calendars already have under this name.
		sequence: moves.length + (live ? 0 : 1),
		stamp: found.closedAt ?? moves.at(-1)?.createdAt ?? found.createdAt,
		start: found.startsAt,
		end: found.endsAt,
		summary: `${found.site}, ${found.zone}`,
		description: `Order ${found.reference}`,
		location: {
			title: found.site,
			geo: { lat: found.latitudeDeg, lon: found.longitudeDeg }
		},
		url: env().ORIGIN + visitorPath(operator, orderId),
		status: live ? ICalEventStatus.CONFIRMED : ICalEventStatus.CANCELLED
	});
	return calendar.toString();
}
