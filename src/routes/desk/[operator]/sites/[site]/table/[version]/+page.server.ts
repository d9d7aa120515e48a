import { fail, redirect, type RequestEvent } from '@sveltejs/kit';
import { isLocalDate, localClock } from '$lib/schedule';
import { readPlan, type Plan, type PlanFault } from '$lib/schemas/plan';
import type { TenantTx } from '$lib/server/db/transaction';
import { Refusal } from '$lib/server/failures';
import { inDesk, orError } from '$lib/server/http';
import { addPlan, demandPlan, mergePlan, savePlan } from '$lib/server/sites/plans';
import { demandSite } from '$lib/server/sites/sites';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const { site, plan } = await orError(
		inDesk(event, async (tx) => {
			const site = await demandSite(tx, event.params.site);
			return { site, plan: await demandPlan(tx, site.id, Number(event.params.version)) };
		})
	);
	const asked = event.url.searchParams.get('date') ?? '';
	return {
		site: { slug: site.slug, name: site.name },
		version: plan.version,
		state: plan.state,
		revision: plan.revision,
		everLive: plan.liveSince !== null,
		body: plan.body,
		date: isLocalDate(asked) ? asked : localClock(plan.body.timeZone).dateAt(Date.now())
	};
};

type Read = { ok: true; plan: Plan } | { ok: false; faults: PlanFault[] };

/** A plan that was sent as JSON, checked by the engine's schema. */
function readJson(text: FormDataEntryValue | null): Read {
	let input: unknown = null;
	try {
		input = JSON.parse(typeof text === 'string' ? text : '');
	} catch {
		// No JSON at all is told as a plan that is missing.
	}
	return readPlan(input);
}

/** What the table sent: the plan, and what its work began from: the revision, to merge the plan too. */
async function readSent(
	event: RequestEvent
): Promise<{ read: Read; revision: number; base: Plan | null }> {
	const form = await event.request.formData();
	const base = readJson(form.get('base'));
	return {
		read: readJson(form.get('plan')),
		revision: Number(form.get('revision')) || 0,
		base: base.ok ? base.plan : null
	};
}

async function withPlan<T>(
	event: RequestEvent,
	act: (tx: TenantTx, sent: { plan: Plan; revision: number; base: Plan | null }) => Promise<T>
) {
	const { read, revision, base } = await readSent(event);
	if (!read.ok) return fail(400, { faults: read.faults, refused: '', status: 400 });
	try {
		return await inDesk(event, (tx) => act(tx, { plan: read.plan, revision, base }));
	} catch (thrown) {
		if (!(thrown instanceof Refusal)) throw thrown;
		const { status, message } = thrown;
		return fail(status, { faults: [], refused: message, status });
	}
}

export const actions: Actions = {
	save: (event) =>
		withPlan(event, async (tx, { plan, revision }) => {
			const { site: slug, version } = event.params as { site: string; version: string };
			await savePlan(tx, { slug, version: Number(version), revision, body: plan });
			return { saved: revision + 1 };
		}),
	/** Nothing is saved: the table shows the outcome as an act that can be undone. */
	merge: (event) =>
		withPlan(event, async (tx, { plan: mine, base }) => {
			if (!base) throw new Refusal('invalid', 'What you began from is not known any more.');
			const { site: slug, version } = event.params as { site: string; version: string };
			return { merge: await mergePlan(tx, { slug, version: Number(version), base, mine }) };
		}),
	copy: async (event) => {
		const done = await withPlan(event, async (tx, { plan }) => ({
			version: await addPlan(tx, event.params.site, plan)
		}));
		if (!('version' in done)) return done;
		const { operator, site } = event.params;
		redirect(303, `/desk/${operator}/sites/${site}/table/${done.version}?saved`);
	}
};
