import { demand } from '$lib/server/auth/rights';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { listSlots } from '$lib/server/programmes/slots';
import { listSites } from '$lib/server/sites/sites';
import { listCalls } from '$lib/server/weather/call-off';
import { askForForecast } from '$lib/server/weather/watch';
import { emptySchema } from '$lib/schemas/people';
import type { Actions, PageServerLoad } from './$types';

const daysAhead = 4;

export const load: PageServerLoad = async (event) => ({
	...(await orError(
		inDesk(event, async (tx) => {
			demand(tx, 'weather.decide');
			const now = new Date();
			const slots = await listSlots(tx, {
				from: now,
				to: new Date(now.getTime() + daysAhead * 86_400_000)
			});
			const sites = await listSites(tx);
			return {
				sites: sites.map(({ id, slug, name, gustLimitMs }) => ({
					slug,
					name,
					gustLimitMs,
					slots: slots.filter(({ siteId }) => siteId === id)
				})),
				calls: await listCalls(tx)
			};
		})
	)),
	form: await emptyForm(emptySchema)
});

export const actions: Actions = {
	read: (event) =>
		handleForm(event, emptySchema, async () => {
			await inDesk(event, async (tx) => {
				for (const { id } of await listSites(tx)) await askForForecast(tx, id);
			});
			return 'The forecast is being read. Look again in a moment.';
		})
};
