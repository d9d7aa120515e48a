import { refundIdSchema } from '$lib/schemas/order';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { retryRefund } from '$lib/server/payments/refunds';
import { callOffProgress, demandCall } from '$lib/server/weather/call-off';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => ({
	...(await orError(
		inDesk(event, async (tx) => {
			const call = await demandCall(tx, event.params.call);
			const rows = await callOffProgress(
				tx,
				call.slots.map(({ id }) => id),
				call.createdAt
			);
			return { call, rows };
		})
	)),
	form: await emptyForm(refundIdSchema)
});

export const actions: Actions = {
	retry: (event) =>
		handleForm(event, refundIdSchema, async ({ refundId }) => {
			await inDesk(event, (tx) => retryRefund(tx, refundId));
			return 'The refund is being tried again.';
		})
};
