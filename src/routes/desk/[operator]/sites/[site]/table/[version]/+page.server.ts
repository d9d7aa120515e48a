import { fail, redirect, type RequestEvent } from '@sveltejs/kit';
import { isLocalDate, localClock } from '$lib/schedule';
import { readPlan, type Plan, type PlanFault } from '$lib/schemas/plan';
import type { TenantTx } from '$lib/server/db/transaction';
import { Refusal } from '$lib/server/failures';
import { inDesk, orError } from '$lib/server/http';
import { addPlan, demandPlan, savePlan } from '$lib/server/sites/plans';
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

/** What the table sent: the plan as JSON, checked by the engine's schema, and the revision it began from. */
async function readSent(event: RequestEvent): Promise<{
	read: { ok: true; plan: Plan } | { ok: false; faults: PlanFault[] };
	revision: number;
}> {
	const form = await event.request.formData();
	const text = form.get('plan');
	let input: unknown = null;
	try {
		input = JSON.parse(typeof text === 'string' ? text : '');
	} catch {
		// No JSON at all is told as a plan that is missing.
	}
	return { read: readPlan(input), revision: Number(form.get('revision')) || 0 };
}

async function withPlan<T>(
	event: RequestEvent,
	act: (tx: TenantTx, sent: { plan: Plan; revision: number }) => Promise<T>
) {
	const { read, revision } = await readSent(event);
	if (!read.ok) return fail(400, { faults: read.faults, refused: '', status: 400 });
	try {
		return await inDesk(event, (tx) => act(tx, { plan: read.plan, revision }));
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
	copy: async (event) => {
		const done = await withPlan(event, async (tx, { plan }) => ({
			version: await addPlan(tx, event.params.site, plan)
		}));
		if (!('version' in done)) return done;
		const { operator, site } = event.params;
		redirect(303, `/desk/${operator}/sites/${site}/table/${done.version}?saved`);
	}
};
