import { orderAnswer } from '$lib/schemas/api';
import { answerJson } from '$lib/server/api';
import { readOrder } from '$lib/server/booking/orders';
import { inTenant } from '$lib/server/db/transaction';
import { Refusal } from '$lib/server/failures';
import { orderOfLink, visitorOrigin } from '$lib/server/visitor';
import type { RequestHandler } from './$types';

/** The state of an order, for whoever holds its link. */
export const GET: RequestHandler = (event) =>
	answerJson(event, async () => {
		const { operator, orderId } = await orderOfLink(event);
		const found = await inTenant(operator.id, visitorOrigin(event), (tx) => readOrder(tx, orderId));
		if (!found) throw new Refusal('not_found', 'There is no such order.');
		return orderAnswer.parse({
			...found,
			holdUntil: found.holdUntil.toISOString(),
			refundedMinor: found.refunds
				.filter(({ status }) => status === 'done' || status === 'sent')
				.reduce((sum, { amountMinor }) => sum + amountMinor, 0)
		});
	});
