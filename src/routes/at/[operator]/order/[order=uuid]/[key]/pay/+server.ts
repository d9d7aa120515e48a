import { redirect } from '@sveltejs/kit';
import { checkoutAddress } from '$lib/server/booking/checkout';
import { visitorPath } from '$lib/server/booking/visitor-key';
import { log } from '$lib/server/log';
import { orderOfLink, visitorOrigin } from '$lib/server/visitor';
import type { RequestHandler } from './$types';

/** Leads to the payment service's page of an order; back to the order when there is nothing to pay. */
export const GET: RequestHandler = async (event) => {
	const { operator, orderId } = await orderOfLink(event);
	let address: string | null = null;
	try {
		address = await checkoutAddress(operator.id, orderId, visitorOrigin(event), new Date());
	} catch (error) {
		log.error({ requestId: event.locals.requestId, err: error }, 'no checkout');
		redirect(303, `${visitorPath(operator, orderId)}?away`);
	}
	redirect(303, address ?? visitorPath(operator, orderId));
};
