import { groupedCode } from '$lib/server/booking/codes';
import { cancelByBoxOffice, cancellationTerms, demandOrder } from '$lib/server/booking/orders';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { retryRefund } from '$lib/server/payments/refunds';
import { cancelOrderSchema, refundIdSchema } from '$lib/schemas/order';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const now = new Date();
	const { found, terms } = await orError(
		inDesk(event, async (tx) => {
			const found = await demandOrder(tx, event.params.order);
			return { found, terms: await cancellationTerms(tx, found, now) };
		})
	);
	return {
		order: {
			...found,
			// The code lets its holder in: the desk sees the end of it, to talk about it.
			tickets: found.tickets.map((ticket) => ({
				...ticket,
				code: `…${groupedCode(ticket.code).slice(-4)}`
			}))
		},
		terms,
		form: await emptyForm(cancelOrderSchema, {}, 'cancel'),
		refundForm: await emptyForm(refundIdSchema, {}, 'refund')
	};
};

export const actions: Actions = {
	cancel: (event) =>
		handleForm(event, cancelOrderSchema, async ({ inFull, words }) => {
			await inDesk(event, (tx) =>
				cancelByBoxOffice(tx, { orderId: event.params.order, inFull, words }, new Date())
			);
			return 'The order is cancelled, and a letter is on its way.';
		}),
	retry: (event) =>
		handleForm(event, refundIdSchema, async ({ refundId }) => {
			await inDesk(event, (tx) => retryRefund(tx, refundId));
			return 'The refund is being tried again.';
		})
};
