import { fail, redirect } from '@sveltejs/kit';
import { localClock } from '$lib/schedule';
import { panoramaSchema, readPanorama, type PanoramaFields } from '$lib/schemas/panorama';
import { demand } from '$lib/server/auth/rights';
import type { TenantTx } from '$lib/server/db/transaction';
import { Refusal } from '$lib/server/failures';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import {
	changePanorama,
	findPanorama,
	markPanorama,
	panoramaEdges,
	putSkyline
} from '$lib/server/sites/panorama';
import { readPicture } from '$lib/server/sites/pictures';
import { demandPlan, listPlans } from '$lib/server/sites/plans';
import { demandSite } from '$lib/server/sites/sites';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const { site, panorama, plans, body } = await orError(
		inDesk(event, async (tx) => {
			demand(tx, 'sites.write');
			const site = await demandSite(tx, event.params.site);
			const plans = await listPlans(tx, site.id);
			const asked = Number(event.url.searchParams.get('version'));
			const newest = plans.find(({ version }) => version === asked) ?? plans[0];
			return {
				site,
				plans,
				panorama: await findPanorama(tx, site.id),
				body: newest && (await demandPlan(tx, site.id, newest.version))
			};
		})
	);
	const { widthPx = 1000, heightPx = 500, marking } = panorama ?? {};
	const [one, other] = marking?.marks ?? [
		{ xPx: widthPx / 4, yPx: heightPx / 2, azimuthDeg: null, altitudeDeg: null },
		{ xPx: (3 * widthPx) / 4, yPx: heightPx / 2, azimuthDeg: null, altitudeDeg: null }
	];
	const text = (value: number | null) =>
		value === null ? '' : String(Math.round(value * 100) / 100);
	return {
		site: {
			slug: site.slug,
			name: site.name,
			latitudeDeg: site.latitudeDeg,
			longitudeDeg: site.longitudeDeg
		},
		today: localClock(site.timeZone).dateAt(Date.now()),
		panorama: panorama && { pictureId: panorama.pictureId, widthPx, heightPx },
		skyline: body?.body.skyline ?? [],
		plans: plans.map(({ version, liveSince }) => ({ version, everLive: liveSince !== null })),
		form: await emptyForm(
			panoramaSchema,
			{
				projection: panorama?.projection ?? 'cylinder',
				azimuth1: text(one.azimuthDeg),
				altitude1: text(one.altitudeDeg),
				x1: text(one.xPx),
				y1: text(one.yPx),
				azimuth2: text(other.azimuthDeg),
				altitude2: text(other.altitudeDeg),
				x2: text(other.xPx),
				y2: text(other.yPx),
				points: JSON.stringify(marking?.points ?? []),
				corners: '',
				version: String(body?.version ?? '')
			},
			'panorama'
		)
	};
};

/** Reads the fields by the size of the picture that is there, and keeps the marks and the line. */
async function keep(tx: TenantTx, slug: string, fields: PanoramaFields) {
	const found = await findPanorama(tx, (await demandSite(tx, slug)).id);
	if (!found) throw new Refusal('conflict', 'There is no picture yet.');
	const read = readPanorama(fields, found);
	await markPanorama(tx, slug, read);
	return read;
}

export const actions: Actions = {
	picture: async (event) => {
		const file = (await event.request.formData()).get('picture');
		try {
			if (!(file instanceof File)) throw new Refusal('invalid', 'Choose a picture.');
			const read = await readPicture(new Uint8Array(await file.arrayBuffer()), panoramaEdges);
			await inDesk(event, (tx) => changePanorama(tx, event.params.site, read));
		} catch (thrown) {
			if (!(thrown instanceof Refusal)) throw thrown;
			return fail(thrown.status, { pictureFault: thrown.message });
		}
		redirect(303, event.url.pathname);
	},
	keep: (event) =>
		handleForm(event, panoramaSchema, async (fields) => {
			await inDesk(event, (tx) => keep(tx, event.params.site, fields));
			return 'The marks and the line are kept.';
		}),
	put: (event) =>
		handleForm(event, panoramaSchema, async (fields) => {
			const { operator, site } = event.params;
			const version = await inDesk(event, async (tx) => {
				const { corners } = await keep(tx, site, fields);
				return putSkyline(tx, { slug: site, version: Number(fields.version), corners });
			});
			redirect(303, `/desk/${operator}/sites/${site}/plan/${version}?saved#skyline-title`);
		})
};
