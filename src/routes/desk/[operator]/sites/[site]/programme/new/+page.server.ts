import { error, redirect } from '@sveltejs/kit';
import { addDays, localClock } from '$lib/schedule';
import { programmeSchema } from '$lib/schemas/site';
import { demand } from '$lib/server/auth/rights';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { programmeFromForm } from '$lib/server/programmes/form';
import { listZones, saveProgramme } from '$lib/server/programmes/programmes';
import { listComputations } from '$lib/server/sites/compute';
import { demandSite } from '$lib/server/sites/sites';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const { site, zones, done } = await orError(
		inDesk(event, async (tx) => {
			demand(tx, 'programmes.write');
			const site = await demandSite(tx, event.params.site);
			const computations = await listComputations(tx, site.id);
			return {
				site,
				zones: await listZones(tx, site.id),
				done: computations.find(({ state }) => state === 'done')
			};
		})
	);
	if (zones.length === 0) error(409, 'A programme needs a zone: make a plan version live first.');
	const today = localClock(site.timeZone).dateAt(Date.now());
	return {
		site: { slug: site.slug, name: site.name, currency: site.currency },
		zones,
		form: await emptyForm(
			programmeSchema,
			{
				name: '',
				zoneId: zones[0]!.id,
				seasonFrom: today,
				seasonTo: done?.toDate ?? addDays(today, 90),
				hours: Array.from({ length: 7 }, () => '09:00-18:00'),
				daysOff: '',
				slotMinutes: '20',
				gapMinutes: '10',
				gridMinutes: '10',
				capacity: '12',
				refundHours: '24',
				refundPercent: '100',
				priceId: [''],
				priceName: ['Adult'],
				priceAmount: [''],
				priceTax: ['10']
			},
			'programme'
		)
	};
};

export const actions: Actions = {
	default: (event) =>
		handleForm(event, programmeSchema, async (data) => {
			const id = await inDesk(event, async (tx) => {
				const site = await demandSite(tx, event.params.site);
				const wanted = programmeFromForm(data, site.currency);
				return saveProgramme(tx, { slug: site.slug, id: null }, wanted);
			});
			redirect(303, `/desk/${event.params.operator}/sites/${event.params.site}/programme/${id}`);
		})
};
