import { inDesk, orError } from '$lib/server/http';
import { livePlan, listSites } from '$lib/server/sites/sites';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => ({
	sites: await orError(
		inDesk(event, async (tx) => {
			const sites = await listSites(tx);
			return Promise.all(
				sites.map(async (site) => ({
					slug: site.slug,
					name: site.name,
					timeZone: site.timeZone,
					currency: site.currency,
					open: site.open,
					liveVersion: (await livePlan(tx, site.id))?.version ?? null
				}))
			);
		})
	)
});
