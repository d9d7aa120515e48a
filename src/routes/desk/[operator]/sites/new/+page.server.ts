import { redirect } from '@sveltejs/kit';
import { newSiteSchema } from '$lib/schemas/site';
import { demand } from '$lib/server/auth/rights';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { createSite } from '$lib/server/sites/sites';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	await orError(inDesk(event, async (tx) => demand(tx, 'sites.write')));
	return { form: await emptyForm(newSiteSchema, { currency: 'EUR' }) };
};

export const actions: Actions = {
	default: (event) =>
		handleForm(event, newSiteSchema, async (data) => {
			const { slug } = await inDesk(event, (tx) => createSite(tx, data));
			redirect(303, `/desk/${event.params.operator}/sites/${slug}`);
		})
};
