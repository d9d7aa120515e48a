import { error } from '@sveltejs/kit';
import { orderCalendar } from '$lib/server/booking/enclosures';
import { inTenant } from '$lib/server/db/transaction';
import { orderOfLink, visitorOrigin } from '$lib/server/visitor';
import type { RequestHandler } from './$types';

/** The visit as a calendar entry. */
export const GET: RequestHandler = async (event) => {
	const { operator, orderId } = await orderOfLink(event);
	const calendar = await inTenant(operator.id, visitorOrigin(event), (tx) =>
		orderCalendar(tx, orderId)
	);
	if (!calendar) error(404, 'There is no such order.');
	return new Response(calendar, {
		headers: {
			'content-type': 'text/calendar; charset=utf-8',
			'content-disposition': 'attachment; filename="visit.ics"',
			'cache-control': 'private, no-store'
		}
	});
};
