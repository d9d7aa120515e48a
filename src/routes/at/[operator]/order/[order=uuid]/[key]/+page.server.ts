import { error } from '@sveltejs/kit';
import { bowStrip } from '$lib/bow-strip';
import { emptySchema } from '$lib/schemas/people';
import { ticketQrAddress } from '$lib/server/booking/enclosures';
import { groupedCode } from '$lib/server/booking/codes';
import { cancelByVisitor, cancellationTerms, readOrder } from '$lib/server/booking/orders';
import { settleOrder } from '$lib/server/booking/settle';
import { inTenant } from '$lib/server/db/transaction';
import { emptyForm, handleForm } from '$lib/server/http';
import { log } from '$lib/server/log';
import { orderOfLink, visitorOrigin } from '$lib/server/visitor';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const { operator, orderId } = await orderOfLink(event);
	event.setHeaders({ 'cache-control': 'private, no-store' });
	const now = new Date();
	const read = () =>
		inTenant(operator.id, visitorOrigin(event), async (tx) => {
			const found = await readOrder(tx, orderId);
			return found ? { found, terms: await cancellationTerms(tx, found, now) } : null;
		});
	let whole = await read();
	if (!whole) error(404, 'There is no order at this address.');
	let away = event.url.searchParams.has('away');
	if (whole.found.status === 'pending') {
		try {
			// The truth at once: the service is asked, however late its own word may be.
			await settleOrder(operator.id, orderId, 'return', now);
			whole = (await read())!;
		} catch (thrown) {
			log.warn({ requestId: event.locals.requestId, err: thrown }, 'order not settled');
			away = true;
		}
	}
	const { found, terms } = whole;
	return {
		order: {
			...found,
			vividness: bowStrip(found.dropDiameterUm).vividness,
			// What a visitor is told of a move; who did it stays with the operator.
			moves: found.moves.map(({ id, wishedBy, words, fromDate, fromStartsAt }) => ({
				id,
				wishedBy,
				words,
				fromDate,
				fromStartsAt
			})),
			lapsed: found.status === 'pending' && found.holdUntil <= now,
			tickets: await Promise.all(
				found.tickets
					.filter(({ status }) => status !== 'moved')
					.map(async (ticket) => ({
						...ticket,
						code: groupedCode(ticket.code),
						qr: ticket.status === 'valid' ? await ticketQrAddress(ticket.code) : null
					}))
			)
		},
		terms,
		away,
		path: event.url.pathname,
		form: await emptyForm(emptySchema)
	};
};

export const actions: Actions = {
	cancel: (event) =>
		handleForm(event, emptySchema, async () => {
			const { operator, orderId } = await orderOfLink(event);
			await inTenant(operator.id, visitorOrigin(event), (tx) =>
				cancelByVisitor(tx, orderId, new Date())
			);
			return 'The order is cancelled.';
		})
};
