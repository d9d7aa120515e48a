import { gateSchema } from '$lib/schemas/order';
import { admit, gateSlots, type Admission } from '$lib/server/gate/gate';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const now = new Date();
	const slots = await orError(inDesk(event, (tx) => gateSlots(tx, now)));
	const asked = event.url.searchParams.get('slot');
	const sold = slots.filter(({ status }) => status !== 'called_off');
	// The slot that is on, else the next one.
	const chosen =
		slots.find(({ id }) => id === asked) ??
		sold.find(({ endsAt }) => endsAt > now) ??
		slots.at(-1) ??
		null;
	return {
		slots,
		chosen,
		now,
		form: await emptyForm(gateSchema, { slotId: chosen?.id ?? '', code: '' })
	};
};

export const actions: Actions = {
	default: async (event) => {
		let admission: Admission | null = null;
		const answered = await handleForm(event, gateSchema, async ({ slotId, code }) => {
			admission = await inDesk(event, (tx) => admit(tx, { slotId, typed: code }, new Date()));
		});
		return 'data' in answered ? answered : { ...answered, admission };
	}
};
