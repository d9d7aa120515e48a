import { error } from '@sveltejs/kit';
import { bowStrip } from '$lib/bow-strip';
import { dayBand } from '$lib/day-band';
import { groupBy } from '$lib/group-by';
import { addDays, isLocalDate, localClock } from '$lib/schedule';
import {
	findOpenSite,
	listPrices,
	listSaleDates,
	listSlotsForSale,
	placesLeft,
	type SlotForSale
} from '$lib/server/booking/slots-for-sale';
import { asVisitor } from '$lib/server/visitor';
import type { PageServerLoad } from './$types';

/** Days that one page lists. */
const pageDays = 4;

export const load: PageServerLoad = async (event) =>
	asVisitor(event, async (tx) => {
		const site = await findOpenSite(tx, event.params.site);
		if (!site) error(404, 'There is nothing at this address.');
		const now = new Date();
		const today = localClock(site.timeZone).dateAt(now.getTime());
		const asked = event.url.searchParams.get('from') ?? '';
		const from =
			isLocalDate(asked) && asked > today && asked < addDays(today, 1000) ? asked : today;
		// The next days that have anything, so that nobody pages through a closed month.
		const dates = await listSaleDates(tx, { siteId: site.id, now, from, most: pageDays + 1 });
		const shown = dates.slice(0, pageDays);
		const slots =
			shown.length > 0
				? await listSlotsForSale(tx, {
						siteId: site.id,
						now,
						from: shown[0]!,
						until: shown.at(-1)!
					})
				: [];
		const prices = new Map<string, Awaited<ReturnType<typeof listPrices>>>();
		for (const { programmeId } of slots) {
			if (!prices.has(programmeId)) prices.set(programmeId, await listPrices(tx, programmeId));
		}
		return {
			site: {
				slug: site.slug,
				name: site.name,
				description: site.description,
				arrival: site.arrival,
				pictureId: site.pictureId,
				pictureAlt: site.pictureAlt,
				timeZone: site.timeZone,
				currency: site.currency
			},
			next: dates[pageDays] ?? null,
			isFirst: from === today,
			/** Then they are said once. */
			samePrices: prices.size <= 1,
			days: shown.map((date) => {
				const own = slots.filter(({ localDate }) => localDate === date);
				return {
					date,
					band: dayBand({ site, date, windows: windowsOf(own), slots: own }),
					strip: own[0] ? bowStrip(own[0].dropDiameterUm) : null,
					slots: own.map((slot) => ({
						id: slot.id,
						zone: slot.zone,
						startsAt: slot.startsAt,
						endsAt: slot.endsAt,
						status: slot.status,
						placesLeft: placesLeft(slot),
						arcDeg: slot.arcDeg,
						share: slot.share,
						lookAzimuthDeg: slot.lookAzimuthDeg,
						prices: prices.get(slot.programmeId) ?? []
					}))
				};
			})
		};
	});

/** The windows that slots lie in, once each. */
function windowsOf(slots: SlotForSale[]) {
	return groupBy(slots, ({ windowStartsAt }) => windowStartsAt.getTime()).map(([, own]) => ({
		startsAt: own[0]!.windowStartsAt,
		endsAt: own[0]!.windowEndsAt,
		peakArcDeg: Math.max(...own.map(({ arcDeg }) => arcDeg))
	}));
}
