import { programmeSchema, publishSchema } from '$lib/schemas/site';
import { emptySchema } from '$lib/schemas/people';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { formFromProgramme, programmeFromForm } from '$lib/server/programmes/form';
import { demandProgramme, listZones, saveProgramme } from '$lib/server/programmes/programmes';
import { previewProgramme, publishProgramme } from '$lib/server/programmes/publish';
import { askForWindows, listComputations } from '$lib/server/sites/compute';
import { keptOf } from '$lib/server/sites/conflict-basis';
import { demandSite, livePlan } from '$lib/server/sites/sites';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const now = new Date();
	const { site, zones, found, preview, running, kept } = await orError(
		inDesk(event, async (tx) => {
			const site = await demandSite(tx, event.params.site);
			const computations = await listComputations(tx, site.id);
			const live = await livePlan(tx, site.id);
			return {
				site,
				zones: await listZones(tx, site.id),
				found: await demandProgramme(tx, site.id, event.params.programme),
				preview: await previewProgramme(tx, site.slug, event.params.programme, now),
				kept: live ? await keptOf(tx, live.id) : new Map<string, never>(),
				running: computations.find(({ state }) => state === 'waiting' || state === 'running')
			};
		})
	);
	const { difference } = preview;
	const interval = ({
		startsAt,
		endsAt,
		localDate
	}: {
		startsAt: Date;
		endsAt: Date;
		localDate: string;
	}) => ({
		startsAt,
		endsAt,
		localDate
	});
	return {
		site: {
			slug: site.slug,
			name: site.name,
			currency: site.currency,
			timeZone: site.timeZone,
			open: site.open
		},
		zones,
		programme: {
			id: found.programme.id,
			name: found.programme.name,
			seasonFrom: found.programme.seasonFrom,
			seasonTo: found.programme.seasonTo,
			capacity: found.programme.capacity,
			publishedAt: found.programme.publishedAt
		},
		running: running ? { daysDone: running.daysDone, daysTotal: running.daysTotal } : null,
		digest: preview.digest,
		obstacles: preview.obstacles,
		cautions: preview.cautions,
		difference: difference && {
			added: difference.added.map(interval),
			kept: difference.kept.map(({ slot, capacity }) => ({
				...interval(slot),
				sold: slot.sold,
				capacity
			})),
			removed: difference.removed.map(interval),
			staying: difference.staying.map(({ slot, outsideWindows }) => ({
				...interval(slot),
				id: slot.id,
				sold: slot.sold,
				held: slot.held,
				outsideWindows,
				kept: kept.get(slot.id) ?? null
			})),
			blocked: difference.blocked.map(interval),
			uncoveredMinutes: difference.uncoveredMinutes,
			bowMinutes: difference.bowMinutes
		},
		form: await emptyForm(
			programmeSchema,
			formFromProgramme(found.programme, found.prices, site.currency),
			'programme'
		),
		publishForm: await emptyForm(publishSchema, { digest: preview.digest }, 'publish'),
		computeForm: await emptyForm(emptySchema, {}, 'compute')
	};
};

export const actions: Actions = {
	save: (event) =>
		handleForm(event, programmeSchema, async (data) => {
			await inDesk(event, async (tx) => {
				const site = await demandSite(tx, event.params.site);
				const wanted = programmeFromForm(data, site.currency);
				await saveProgramme(tx, { slug: site.slug, id: event.params.programme }, wanted);
			});
			return 'Saved. See below what publishing does now.';
		}),
	publish: (event) =>
		handleForm(event, publishSchema, async ({ digest }) => {
			const { added, removed, kept } = await inDesk(event, (tx) =>
				publishProgramme(tx, event.params.site, event.params.programme, digest, new Date())
			);
			return `Published: ${added} slots added, ${removed} removed, ${kept} kept.`;
		}),
	compute: (event) =>
		handleForm(event, emptySchema, async () => {
			await inDesk(event, async (tx) => {
				const site = await demandSite(tx, event.params.site);
				const { programme } = await demandProgramme(tx, site.id, event.params.programme);
				await askForWindows(tx, site.id, { from: programme.seasonFrom, to: programme.seasonTo });
			});
			return 'The windows of this season are being computed.';
		})
};
