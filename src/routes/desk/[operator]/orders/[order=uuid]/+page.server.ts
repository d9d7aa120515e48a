import { groupedCode } from '$lib/server/booking/codes';
import { cancelByBoxOffice, cancellationTerms, demandOrder } from '$lib/server/booking/orders';
import { listMoveTargets, moveOrder } from '$lib/server/booking/move';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { retryRefund } from '$lib/server/payments/refunds';
import { mayRole } from '$lib/server/auth/rights';
import { cancelOrderSchema, moveOrderSchema, refundIdSchema } from '$lib/schemas/order';
import { redirect } from '@sveltejs/kit';
import { v7 as uuidv7 } from 'uuid';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const now = new Date();
	const { found, terms, targets } = await orError(
		inDesk(event, async (tx) => {
			const found = await demandOrder(tx, event.params.order);
			const mayMove = mayRole(event.locals.membership!.role, 'orders.move');
			const wish = { siteId: found.siteId, besides: found.slotId, places: found.places };
			return {
				found,
				terms: await cancellationTerms(tx, found, now),
				targets: mayMove && found.status === 'paid' ? await listMoveTargets(tx, wish, now) : []
			};
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
		targets,
		moveId: uuidv7(),
		moveForm: await emptyForm(
			moveOrderSchema,
			{ slotId: targets[0]?.id ?? '', wishedBy: 'visitor' },
			'move'
		),
		form: await emptyForm(cancelOrderSchema, {}, 'cancel'),
		refundForm: await emptyForm(refundIdSchema, {}, 'refund')
	};
};

export const actions: Actions = {
	move: (event) =>
		handleForm(event, moveOrderSchema, async ({ slotId, ...wish }) => {
			await inDesk(event, (tx) => moveOrder(tx, event.params.order, slotId, wish, new Date()));
			redirect(303, `/desk/${event.params.operator}/orders/${event.params.order}?moved`);
		}),
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
