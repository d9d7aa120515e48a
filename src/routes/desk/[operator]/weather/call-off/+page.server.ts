import { redirect } from '@sveltejs/kit';
import { callOffSchema } from '$lib/schemas/order';
import { isUuid } from '$lib/ids';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { listSlots } from '$lib/server/programmes/slots';
import { demandSite } from '$lib/server/sites/sites';
import { callOff, weighCallOff } from '$lib/server/weather/call-off';
import type { Actions, PageServerLoad } from './$types';

const weekMs = 7 * 86_400_000;

export const load: PageServerLoad = async (event) => {
	const query = event.url.searchParams;
	const day = query.get('day');
	const weighed = await orError(
		inDesk(event, async (tx) => {
			let slotIds = query.getAll('slot').filter(isUuid);
			if (day) {
				const site = await demandSite(tx, query.get('site') ?? '');
				const now = new Date();
				const slots = await listSlots(tx, {
					from: now,
					to: new Date(now.getTime() + weekMs),
					siteId: site.id
				});
				slotIds = slots
					.filter(({ localDate, status }) => localDate === day && status !== 'called_off')
					.map(({ id }) => id);
			}
			return weighCallOff(tx, slotIds);
		})
	);
	return {
		...weighed,
		form: await emptyForm(callOffSchema, { slotId: weighed.slots.map(({ id }) => id), reason: '' })
	};
};

export const actions: Actions = {
	default: (event) =>
		handleForm(event, callOffSchema, async ({ slotId, reason }) => {
			const id = await inDesk(event, (tx) => callOff(tx, { slotIds: slotId, reason }, new Date()));
			redirect(303, `/desk/${event.params.operator}/weather/${id}`);
		})
};
