import { addDays, localClock } from '$lib/schedule';
import { waterSchema } from '$lib/schemas/site';
import { demand } from '$lib/server/auth/rights';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { demandSite } from '$lib/server/sites/sites';
import { addWaterEntry, listWater, waterKindNames, waterWarnings } from '$lib/server/sites/water';
import type { Actions, PageServerLoad } from './$types';

/** What the form offers as the next date; local codes may ask for another. */
const usualDays = 30;

export const load: PageServerLoad = async (event) => {
	const { site, entries, warnings, today } = await orError(
		inDesk(event, async (tx) => {
			demand(tx, 'sites.write');
			const site = await demandSite(tx, event.params.site);
			const today = localClock(site.timeZone).dateAt(Date.now());
			return {
				site,
				today,
				entries: await listWater(tx, site.id),
				warnings: await waterWarnings(tx, site.id, today)
			};
		})
	);
	return {
		site: { slug: site.slug, name: site.name },
		today,
		warnings,
		entries: entries.map(({ id, kind, doneOn, nextDueOn, note, notedByName }) => ({
			id,
			kind: waterKindNames[kind],
			doneOn,
			nextDueOn,
			note,
			notedByName
		})),
		kinds: Object.entries(waterKindNames).map(([value, label]) => ({ value, label })),
		form: await emptyForm(waterSchema, {
			kind: 'disinfection',
			doneOn: today,
			nextDueOn: addDays(today, usualDays)
		})
	};
};

export const actions: Actions = {
	default: (event) =>
		handleForm(event, waterSchema, async ({ nextDueOn, ...data }) => {
			await inDesk(event, (tx) =>
				addWaterEntry(
					tx,
					event.params.site,
					{ ...data, nextDueOn: nextDueOn === '' ? null : nextDueOn },
					new Date()
				)
			);
			return 'It is in the log.';
		})
};
