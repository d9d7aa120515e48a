import { inDesk, orError } from '$lib/server/http';
import { demandPlan } from '$lib/server/sites/plans';
import { demandSite } from '$lib/server/sites/sites';
import type { RequestHandler } from './$types';

/** A plan version as a file. */
export const GET: RequestHandler = async (event) => {
	const plan = await orError(
		inDesk(event, async (tx) => {
			const site = await demandSite(tx, event.params.site);
			return demandPlan(tx, site.id, Number(event.params.version));
		})
	);
	return new Response(JSON.stringify(plan.body, null, '\t'), {
		headers: {
			'content-type': 'application/json',
			'content-disposition': `attachment; filename="${event.params.site}-${plan.version}.json"`
		}
	});
};
