import { localClock } from '$lib/schedule';
import { inDesk, orError } from '$lib/server/http';
import { demandPlan } from '$lib/server/sites/plans';
import { sellingOf } from '$lib/server/sites/selling';
import { demandSite } from '$lib/server/sites/sites';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const { site, plan, programmes } = await orError(
		inDesk(event, async (tx) => {
			const site = await demandSite(tx, event.params.site);
			return {
				site,
				plan: await demandPlan(tx, site.id, Number(event.params.version)),
				programmes: await sellingOf(tx, site.id)
			};
		})
	);
	return {
		site: { slug: site.slug, name: site.name },
		version: plan.version,
		state: plan.state,
		revision: plan.revision,
		everLive: plan.liveSince !== null,
		body: plan.body,
		programmes,
		today: localClock(plan.body.timeZone).dateAt(Date.now())
	};
};
