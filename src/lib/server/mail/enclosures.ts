import type { Attachment } from 'nodemailer/lib/mailer';
import { orderCalendar, ticketQrPng } from '../booking/enclosures';
import { listTickets } from '../booking/tickets';
import type { Enclosure } from '../db/schema/letters';
import type { TenantTx } from '../db/transaction';
import { readDocument } from '../invoicing/documents';
import { documentPdf } from '../invoicing/pdf';

/** Draws up what goes with a letter from the rows that it names. */
export async function drawUp(tx: TenantTx, enclosures: Enclosure[]): Promise<Attachment[]> {
	const parts: Attachment[] = [];
	for (const enclosure of enclosures) {
		if (enclosure.kind === 'document')
			parts.push(...(await documentPart(tx, enclosure.documentId)));
		else parts.push(...(await ticketParts(tx, enclosure)));
	}
	return parts;
}

async function documentPart(tx: TenantTx, id: string): Promise<Attachment[]> {
	const found = await readDocument(tx, id);
	if (!found) return [];
	return [
		{
			filename: `${found.number}.pdf`,
			contentType: 'application/pdf',
			content: await documentPdf(found)
		}
	];
}

async function ticketParts(
	tx: TenantTx,
	{ orderId, ticketIds }: { orderId: string; ticketIds?: string[] }
): Promise<Attachment[]> {
	const parts: Attachment[] = [];
	// A letter that waited long shows the pictures of the codes that stand in it, whatever came after.
	const tickets = await listTickets(tx, orderId, { moved: true });
	for (const ticket of tickets.filter(({ id }) => ticketIds?.includes(id) ?? true)) {
		parts.push({
			filename: `ticket-${ticket.code}.png`,
			contentType: 'image/png',
			cid: `${ticket.id}@ticket`,
			content: await ticketQrPng(ticket.code)
		});
	}
	const calendar = await orderCalendar(tx, orderId);
	if (calendar) {
		parts.push({
			filename: 'visit.ics',
			contentType: 'text/calendar; charset=utf-8; method=PUBLISH',
			content: calendar
		});
	}
	return parts;
}
