import { dayBand } from '$lib/day-band';
import { addDays, localClock } from '$lib/schedule';
import { windowsRangeSchema } from '$lib/schemas/site';
import { demand } from '$lib/server/auth/rights';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { askForWindows, listComputations, readWindows } from '$lib/server/sites/compute';
import { demandSite, livePlan } from '$lib/server/sites/sites';
import type { Actions, PageServerLoad } from './$types';

const bandDays = 31;

export const load: PageServerLoad = async (event) => {
	const found = await orError(
		inDesk(event, async (tx) => {
			demand(tx, 'sites.write');
			const site = await demandSite(tx, event.params.site);
			const live = await livePlan(tx, site.id);
			const computations = await listComputations(tx, site.id);
			const asked = event.url.searchParams.get('run');
			const shown =
				computations.find(({ id }) => id === asked) ??
				computations.find(({ state }) => state === 'done') ??
				null;
			const wanted = event.url.searchParams.get('from') ?? '';
			const from =
				shown && wanted >= shown.fromDate && wanted <= shown.toDate
					? wanted
					: (shown?.fromDate ?? '');
			const last = shown ? addDays(from, bandDays - 1) : '';
			const to = shown && last > shown.toDate ? shown.toDate : last;
			const windows = shown ? await readWindows(tx, shown.id, { from, to }) : [];
			const days: string[] = [];
			for (let date = from; shown && date <= to; date = addDays(date, 1)) days.push(date);
			return {
				site: { slug: site.slug, name: site.name, timeZone: site.timeZone },
				live: live ? { version: live.version } : null,
				computations,
				shown: shown
					? { id: shown.id, from, to, fromDate: shown.fromDate, toDate: shown.toDate }
					: null,
				next: shown && to < shown.toDate ? addDays(to, 1) : null,
				days: days.map((date) => ({
					date,
					band: dayBand({ site, date, windows, slots: [] }),
					windows: windows
						.filter(({ localDate }) => localDate === date)
						.map(({ id, zone, startsAt, endsAt, peakShare, peakArcDeg }) => ({
							id,
							zone,
							startsAt,
							endsAt,
							peakShare,
							peakArcDeg
						}))
				}))
			};
		})
	);
	const today = localClock(found.site.timeZone).dateAt(Date.now());
	return {
		...found,
		form: await emptyForm(windowsRangeSchema, { from: today, to: addDays(today, 364) })
	};
};

export const actions: Actions = {
	default: (event) =>
		handleForm(event, windowsRangeSchema, async (range) => {
			await inDesk(event, async (tx) => {
				const site = await demandSite(tx, event.params.site);
				await askForWindows(tx, site.id, range);
			});
			return 'The windows are being computed. You can leave this page.';
		})
};
