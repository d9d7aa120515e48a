import { dayBand } from '$lib/day-band';
import { localClock } from '$lib/schedule';
import { slotIdSchema } from '$lib/schemas/order';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { demand } from '$lib/server/auth/rights';
import { listSlots, setSlotPaused } from '$lib/server/programmes/slots';
import { windowsOfSite } from '$lib/server/sites/compute';
import { listSites } from '$lib/server/sites/sites';
import type { Actions, PageServerLoad } from './$types';

const weekMs = 7 * 86_400_000;

export const load: PageServerLoad = async (event) => ({
	...(await orError(
		inDesk(event, async (tx) => {
			demand(tx, 'orders.read');
			const now = new Date();
			const sites = await listSites(tx);
			const site =
				sites.find(({ slug }) => slug === event.url.searchParams.get('site')) ?? sites[0] ?? null;
			const week = Math.min(104, Math.max(0, Number(event.url.searchParams.get('week')) || 0));
			if (!site) return { sites: [], site: null, week, days: [], slots: [] };
			const from = new Date(now.getTime() + week * weekMs);
			const slots = await listSlots(tx, {
				from,
				to: new Date(from.getTime() + weekMs),
				siteId: site.id
			});
			const dates = [...new Set(slots.map(({ localDate }) => localDate))];
			const range = {
				from: dates[0] ?? localClock(site.timeZone).dateAt(from.getTime()),
				to: dates.at(-1) ?? localClock(site.timeZone).dateAt(from.getTime())
			};
			const windows = await windowsOfSite(tx, site.id, range);
			return {
				sites: sites.map(({ slug, name }) => ({ slug, name })),
				site: { slug: site.slug, name: site.name, timeZone: site.timeZone },
				week,
				days: dates.map((date) => {
					const own = slots.filter(({ localDate }) => localDate === date);
					return { date, slots: own, band: dayBand({ site, date, windows, slots: own }) };
				})
			};
		})
	)),
	form: await emptyForm(slotIdSchema)
});

export const actions: Actions = {
	pause: (event) =>
		handleForm(event, slotIdSchema, async ({ slotId }) => {
			await inDesk(event, (tx) => setSlotPaused(tx, slotId, true));
			return 'The slot is paused: nobody can buy, what was sold stays valid.';
		}),
	open: (event) =>
		handleForm(event, slotIdSchema, async ({ slotId }) => {
			await inDesk(event, (tx) => setSlotPaused(tx, slotId, false));
			return 'The slot is for sale again.';
		})
};
