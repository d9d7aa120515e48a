import { dayBand } from '$lib/day-band';
import { localClock } from '$lib/schedule';
import { mayRole } from '$lib/server/auth/rights';
import { inDesk } from '$lib/server/http';
import { failedRefunds } from '$lib/server/payments/refunds';
import { listSlots } from '$lib/server/programmes/slots';
import { windowsOfSite } from '$lib/server/sites/compute';
import { listSites } from '$lib/server/sites/sites';
import type { PageServerLoad } from './$types';

const dayMs = 86_400_000;

/** The first screen answers what its role came with. */
export const load: PageServerLoad = (event) =>
	inDesk(event, async (tx) => {
		const role = event.locals.membership!.role;
		const now = new Date();
		const sites = await listSites(tx);
		const slots = await listSlots(tx, { from: now, to: new Date(now.getTime() + 3 * dayMs) });
		const days = await Promise.all(
			sites.map(async (site) => {
				const clock = localClock(site.timeZone);
				const today = clock.dateAt(now.getTime());
				const own = slots.filter(({ siteId }) => siteId === site.id);
				const ofToday = own.filter(({ localDate }) => localDate === today);
				// When today is over, the next day with slots is what the user came for.
				const date = ofToday.length > 0 ? today : (own[0]?.localDate ?? today);
				const [from, to] = [new Date(now.getTime() - dayMs), new Date(now.getTime() + 4 * dayMs)];
				const around = await listSlots(tx, { from, to, siteId: site.id });
				const ofDate = around.filter(({ localDate }) => localDate === date);
				const windows = await windowsOfSite(tx, site.id, { from: date, to: date });
				return {
					site: { slug: site.slug, name: site.name, timeZone: site.timeZone, open: site.open },
					date,
					isToday: date === today,
					band: dayBand({ site, date, windows, slots: ofDate }),
					slots: ofDate.filter(({ endsAt }) => endsAt > now)
				};
			})
		);
		return {
			days,
			toDecide: mayRole(role, 'weather.decide')
				? slots.filter(
						({ status, suggestion }) =>
							status !== 'called_off' && (suggestion === 'call_off' || suggestion === 'wait')
					)
				: [],
			failed: mayRole(role, 'orders.write') ? await failedRefunds(tx) : []
		};
	});
