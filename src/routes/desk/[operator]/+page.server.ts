import { bowStrip } from '$lib/bow-strip';
import { dayBand } from '$lib/day-band';
import { groupBy } from '$lib/group-by';
import { localClock } from '$lib/schedule';
import { mayRole } from '$lib/server/auth/rights';
import { deskOrigin, inDesk } from '$lib/server/http';
import { failedRefunds } from '$lib/server/payments/refunds';
import { listSlots, type ListedSlot } from '$lib/server/programmes/slots';
import { windowsOfSite } from '$lib/server/sites/compute';
import { countUndecided } from '$lib/server/sites/conflicts';
import { listSites } from '$lib/server/sites/sites';
import type { PageServerLoad, PageServerLoadEvent } from './$types';

const dayMs = 86_400_000;

/** The first screen answers what its role came with. */
export const load: PageServerLoad = async (event) => {
	const found = await readDay(event);
	const outside: { site: string; slug: string; slots: number }[] = [];
	if (mayRole(event.locals.membership!.role, 'conflicts.decide')) {
		for (const { site } of found.days) {
			const slots = await countUndecided(deskOrigin(event), site.slug, new Date());
			if (slots > 0) outside.push({ site: site.name, slug: site.slug, slots });
		}
	}
	return { ...found, outside };
};

const readDay = (event: PageServerLoadEvent) =>
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
					strip: ofDate[0] ? bowStrip(ofDate[0].dropDiameterUm) : null,
					slots: ofDate.filter(({ endsAt }) => endsAt > now)
				};
			})
		);
		return {
			days,
			toDecide: mayRole(role, 'weather.decide') ? doubts(slots) : [],
			failed: mayRole(role, 'orders.write') ? await failedRefunds(tx) : []
		};
	});

interface Doubt {
	site: string;
	localDate: string;
	timeZone: string;
	firstAt: Date;
	lastAt: Date;
	slots: number;
	sold: number;
	because: string;
}

/** Slots that the weather watch doubts, by site and day; what is sold first. */
function doubts(slots: ListedSlot[]): Doubt[] {
	const doubted = slots.filter(
		({ status, suggestion }) =>
			status !== 'called_off' && (suggestion === 'call_off' || suggestion === 'wait')
	);
	return groupBy(doubted, ({ site, localDate }) => `${localDate} ${site}`)
		.map(([, own]) => {
			const [first, last] = [own[0]!, own.at(-1)!];
			return {
				site: first.site,
				localDate: first.localDate,
				timeZone: first.timeZone,
				firstAt: first.startsAt,
				lastAt: last.endsAt,
				slots: own.length,
				sold: own.reduce((sum, { sold }) => sum + sold, 0),
				because: (own.find(({ sold }) => sold > 0) ?? first).because ?? ''
			};
		})
		.sort((a, b) => Number(b.sold > 0) - Number(a.sold > 0) || +a.firstAt - +b.firstAt);
}
