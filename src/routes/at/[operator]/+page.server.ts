import { redirect } from '@sveltejs/kit';
import { listOpenSites } from '$lib/server/booking/slots-for-sale';
import { asVisitor } from '$lib/server/visitor';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const sites = await asVisitor(event, (tx) => listOpenSites(tx));
	if (sites.length === 1) redirect(303, `/at/${event.params.operator}/${sites[0]!.slug}`);
	return {
		sites: sites.map(({ slug, name, description, pictureId, pictureAlt }) => ({
			slug,
			name,
			description,
			pictureId,
			pictureAlt
		}))
	};
};
