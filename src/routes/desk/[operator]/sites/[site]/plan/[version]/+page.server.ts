import { fail, redirect } from '@sveltejs/kit';
import { localClock } from '$lib/schedule';
import { fieldsFromPlan, planFromFields, type PlanFields } from '$lib/schemas/plan-form';
import { Refusal } from '$lib/server/failures';
import { inDesk, orError } from '$lib/server/http';
import { addPlan, demandPlan, savePlan } from '$lib/server/sites/plans';
import { demandSite } from '$lib/server/sites/sites';
import type { TenantTx } from '$lib/server/db/transaction';
import type { Actions, PageServerLoad, RequestEvent } from './$types';

export const load: PageServerLoad = async (event) => {
	const { site, plan } = await orError(
		inDesk(event, async (tx) => {
			const site = await demandSite(tx, event.params.site);
			return { site, plan: await demandPlan(tx, site.id, Number(event.params.version)) };
		})
	);
	return {
		site: { slug: site.slug, name: site.name },
		version: plan.version,
		today: localClock(site.timeZone).dateAt(Date.now()),
		state: plan.state,
		revision: plan.revision,
		everLive: plan.liveSince !== null,
		body: plan.body,
		fields: fieldsFromPlan(plan.body)
	};
};

/** What the form sent, whole: a refusal gives all of it back. */
async function readFields(event: RequestEvent): Promise<{ fields: PlanFields; revision: number }> {
	const fields: PlanFields = {};
	for (const [name, value] of await event.request.formData()) {
		if (typeof value === 'string' && name.length < 60) fields[name] = value;
	}
	return { fields, revision: Number(fields['revision']) || 0 };
}

/** Reads the tables and acts on the plan; faults and refusals come back with what was typed. */
async function withPlan(
	event: RequestEvent,
	act: (
		tx: TenantTx,
		read: { plan: Parameters<typeof savePlan>[1]['body']; revision: number }
	) => Promise<number>
) {
	const { fields, revision } = await readFields(event);
	try {
		const version = await inDesk(event, async (tx) => {
			const at = await demandSite(tx, event.params.site);
			const read = planFromFields(fields, {
				name: at.name,
				latitude: at.latitudeDeg,
				longitude: at.longitudeDeg,
				elevation: at.elevationM,
				timeZone: at.timeZone
			});
			if ('faults' in read) throw new PlanWrong(read.faults);
			return act(tx, { plan: read.plan, revision });
		});
		return { version };
	} catch (thrown) {
		if (thrown instanceof PlanWrong)
			return fail(400, { faults: thrown.faults, fields, refused: '' });
		if (!(thrown instanceof Refusal)) throw thrown;
		return fail(thrown.status, { faults: [], fields, refused: thrown.message });
	}
}

/** Carries the faults of a plan out of its transaction. */
class PlanWrong extends Error {
	constructor(readonly faults: { path: string; message: string }[]) {
		super('the plan is wrong');
	}
}

const pathOf = (event: RequestEvent, version: number) =>
	`/desk/${event.params.operator}/sites/${event.params.site}/plan/${version}`;

export const actions: Actions = {
	save: async (event) => {
		const done = await withPlan(event, async (tx, { plan, revision }) => {
			const version = Number(event.params.version);
			await savePlan(tx, { slug: event.params.site, version, revision, body: plan });
			return version;
		});
		if (!('version' in done)) return done;
		redirect(303, `${pathOf(event, done.version)}?saved`);
	},
	copy: async (event) => {
		const done = await withPlan(event, (tx, { plan }) => addPlan(tx, event.params.site, plan));
		if (!('version' in done)) return done;
		redirect(303, `${pathOf(event, done.version)}?saved`);
	}
};
