import { addDays, localClock } from '$lib/schedule';
import { windowsAnswer } from '$lib/schemas/api';
import { answerJson, rangeOf } from '$lib/server/api';
import { findOpenSite } from '$lib/server/booking/slots-for-sale';
import { Refusal } from '$lib/server/failures';
import { windowsOfSite } from '$lib/server/sites/compute';
import { asVisitor } from '$lib/server/visitor';
import type { RequestHandler } from './$types';

/** Stored windows of a site's live plan: `?from=2027-03-28&to=2027-04-03`. They change rarely. */
export const GET: RequestHandler = (event) =>
	answerJson(
		event,
		() =>
			asVisitor(event, async (tx) => {
				const site = await findOpenSite(tx, event.params.site);
				if (!site) throw new Refusal('not_found', 'There is no such site.');
				const today = localClock(site.timeZone).dateAt(Date.now());
				const range = rangeOf(event.url, { from: today, to: addDays(today, 6) });
				const windows = await windowsOfSite(tx, site.id, range);
				return windowsAnswer.parse({
					site: site.name,
					timeZone: site.timeZone,
					windows: windows.map((window) => ({
						...window,
						date: window.localDate,
						startsAt: window.startsAt.toISOString(),
						endsAt: window.endsAt.toISOString()
					}))
				});
			}),
		{ seconds: 300, shared: true }
	);
