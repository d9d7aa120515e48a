import { localClock } from '$lib/schedule';
import { inDesk, orError } from '$lib/server/http';
import { readYearSheet } from '$lib/server/sites/year-sheet';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const { site, plans, programmes } = await orError(
		inDesk(event, (tx) => readYearSheet(tx, event.params.site))
	);
	return {
		site: { slug: site.slug, name: site.name },
		plans,
		programmes,
		today: localClock(site.timeZone).dateAt(Date.now())
	};
};
