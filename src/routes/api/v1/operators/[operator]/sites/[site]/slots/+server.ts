import { addDays, localClock } from '$lib/schedule';
import { slotsAnswer } from '$lib/schemas/api';
import { answerJson, rangeOf } from '$lib/server/api';
import { findOpenSite, listSlotsForSale, placesLeft } from '$lib/server/booking/slots-for-sale';
import { Refusal } from '$lib/server/failures';
import { asVisitor } from '$lib/server/visitor';
import type { RequestHandler } from './$types';

/** Coming slots of a site with the places left: `?from=2027-03-28&to=2027-04-03` (92 days at most). */
export const GET: RequestHandler = (event) =>
	answerJson(event, () =>
		asVisitor(event, async (tx) => {
			const site = await findOpenSite(tx, event.params.site);
			if (!site) throw new Refusal('not_found', 'There is no such site.');
			const now = new Date();
			const today = localClock(site.timeZone).dateAt(now.getTime());
			const { from, to } = rangeOf(event.url, { from: today, to: addDays(today, 30) });
			const slots = await listSlotsForSale(tx, { siteId: site.id, now, from, until: to });
			return slotsAnswer.parse({
				site: site.name,
				timeZone: site.timeZone,
				currency: site.currency,
				slots: slots.map((slot) => ({
					...slot,
					date: slot.localDate,
					startsAt: slot.startsAt.toISOString(),
					endsAt: slot.endsAt.toISOString(),
					placesLeft: slot.status === 'open' ? placesLeft(slot) : 0
				}))
			});
		})
	);
