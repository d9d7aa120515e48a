import { fail, redirect } from '@sveltejs/kit';
import { localClock } from '$lib/schedule';
import { emptySchema } from '$lib/schemas/people';
import { siteSchema } from '$lib/schemas/site';
import { readPlan } from '$lib/schemas/plan';
import { demand } from '$lib/server/auth/rights';
import { Refusal } from '$lib/server/failures';
import { deskOrigin, emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { listProgrammes } from '$lib/server/programmes/programmes';
import { listComputations } from '$lib/server/sites/compute';
import { countUndecided } from '$lib/server/sites/conflicts';
import { changePicture, readPicture } from '$lib/server/sites/pictures';
import { addPlan, listPlans } from '$lib/server/sites/plans';
import { waterWarnings } from '$lib/server/sites/water';
import { changeSite, demandSite, wasEverLive } from '$lib/server/sites/sites';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const conflicts = await orError(countUndecided(deskOrigin(event), event.params.site, new Date()));
	const { site, ...rest } = await orError(
		inDesk(event, async (tx) => {
			demand(tx, 'sites.write');
			const site = await demandSite(tx, event.params.site);
			return {
				site,
				placeFixed: await wasEverLive(tx, site.id),
				plans: await listPlans(tx, site.id),
				computations: await listComputations(tx, site.id),
				programmes: await listProgrammes(tx, site.id),
				waterWarnings: await waterWarnings(
					tx,
					site.id,
					localClock(site.timeZone).dateAt(Date.now())
				)
			};
		})
	);
	return {
		...rest,
		conflicts,
		site: { slug: site.slug, name: site.name, open: site.open, pictureId: site.pictureId },
		form: await emptyForm(
			siteSchema,
			{
				...site,
				latitudeDeg: String(site.latitudeDeg),
				longitudeDeg: String(site.longitudeDeg),
				elevationM: String(site.elevationM),
				gustLimitMs: String(site.gustLimitMs)
			},
			'site'
		),
		planForm: await emptyForm(emptySchema, {}, 'plan')
	};
};

/** What a file that is no plan is answered with: its faults, one a line. */
function planFaults(text: string) {
	let input: unknown;
	try {
		input = JSON.parse(text.replace(/^\uFEFF/, ''));
	} catch {
		return { faults: ['The file is not JSON.'] };
	}
	const read = readPlan(input);
	if (read.ok) return { plan: read.plan };
	const told = read.faults
		.slice(0, mostFaultsTold)
		.map(({ path, message }) => `${path}: ${message}`);
	const rest = read.faults.length - told.length;
	return { faults: rest > 0 ? [...told, `And ${rest} more of the kind.`] : told };
}

/** A list of thousands of rows may be wrong in every one. */
const mostFaultsTold = 20;

const mostPlanBytes = 1024 * 1024;

export const actions: Actions = {
	site: (event) =>
		handleForm(event, siteSchema, async (data) => {
			await inDesk(event, (tx) => changeSite(tx, event.params.site, data));
			return 'The site is saved.';
		}),
	picture: async (event) => {
		const sent = await event.request.formData();
		const file = sent.get('picture');
		const alt = String(sent.get('alt') ?? '')
			.trim()
			.slice(0, 200);
		try {
			if (!(file instanceof File)) throw new Refusal('invalid', 'Choose a picture.');
			const read = await readPicture(new Uint8Array(await file.arrayBuffer()));
			await inDesk(event, (tx) => changePicture(tx, event.params.site, read, alt));
		} catch (thrown) {
			if (!(thrown instanceof Refusal)) throw thrown;
			return fail(thrown.status, { pictureFault: thrown.message, alt });
		}
		return { pictureDone: 'The picture is in place.' };
	},
	newPlan: (event) =>
		handleForm(event, emptySchema, async () => {
			const version = await inDesk(event, (tx) => addPlan(tx, event.params.site, null));
			redirect(303, `/desk/${event.params.operator}/sites/${event.params.site}/plan/${version}`);
		}),
	upload: async (event) => {
		const file = (await event.request.formData()).get('file');
		if (!(file instanceof File) || file.size === 0) {
			return fail(400, { planFaults: ['Choose a plan file (JSON).'] });
		}
		if (file.size > mostPlanBytes) {
			return fail(400, { planFaults: ['A plan file has at most 1 MB.'] });
		}
		const read = planFaults(await file.text());
		if (!read.plan) return fail(400, { planFaults: read.faults });
		let version: number;
		try {
			version = await inDesk(event, (tx) => addPlan(tx, event.params.site, read.plan));
		} catch (thrown) {
			if (!(thrown instanceof Refusal)) throw thrown;
			return fail(thrown.status, { planFaults: [thrown.message] });
		}
		redirect(303, `/desk/${event.params.operator}/sites/${event.params.site}/plan/${version}`);
	}
};
