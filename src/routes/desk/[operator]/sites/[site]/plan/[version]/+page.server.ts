import { fail, redirect } from '@sveltejs/kit';
import { localClock } from '$lib/schedule';
import { fieldsFromPlan, planFromFields, type PlanFields } from '$lib/schemas/plan-form';
import { clashWords, type Clash } from '$lib/plan-merge/merge';
import { readPlan, type Plan, type PlanFault } from '$lib/schemas/plan';
import { Refusal } from '$lib/server/failures';
import { inDesk, orError } from '$lib/server/http';
import { addPlan, demandPlan, mergePlan, savePlan } from '$lib/server/sites/plans';
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
		base: JSON.stringify(plan.body),
		everLive: plan.liveSince !== null,
		body: plan.body,
		fields: fieldsFromPlan(plan.body)
	};
};

/** What the form sent. */
interface Sent {
	fields: PlanFields;
	/** The count of saves that the work began from, and the plan as it was then, as JSON. */
	revision: number;
	base: string;
}

/** What a refusal gives back: all that was sent. A second try must not pass for newer than it is. */
const back = ({ fields, revision, base }: Sent) => ({
	fields,
	revision,
	base,
	faults: [] as PlanFault[],
	refused: '',
	mayMerge: false,
	merged: null as { taken: number; clashes: string[] } | null
});

async function readSent(event: RequestEvent): Promise<Sent> {
	const fields: PlanFields = {};
	const sent: Sent = { fields, revision: 0, base: '' };
	for (const [name, value] of await event.request.formData()) {
		if (typeof value !== 'string' || name.length >= 60) continue;
		if (name === 'revision') sent.revision = Number(value) || 0;
		else if (name === 'base') sent.base = value;
		else fields[name] = value;
	}
	return sent;
}

/** Reads the tables and acts on the plan; faults and refusals come back with what was typed. */
async function withPlan<T>(
	event: RequestEvent,
	act: (tx: TenantTx, read: { plan: Plan; sent: Sent }) => Promise<T>
) {
	const sent = await readSent(event);
	try {
		const done = await inDesk(event, async (tx) => {
			const at = await demandSite(tx, event.params.site);
			const read = planFromFields(sent.fields, {
				name: at.name,
				latitude: at.latitudeDeg,
				longitude: at.longitudeDeg,
				elevation: at.elevationM,
				timeZone: at.timeZone
			});
			if ('faults' in read) throw new PlanWrong(read.faults);
			return act(tx, { plan: read.plan, sent });
		});
		return { done, sent };
	} catch (thrown) {
		if (thrown instanceof PlanWrong) {
			return { failed: fail(400, { ...back(sent), faults: thrown.faults }) };
		}
		if (!(thrown instanceof Refusal)) throw thrown;
		const { status, message } = thrown;
		const mayMerge = status === 409 && readBase(sent.base) !== null;
		return { failed: fail(status, { ...back(sent), refused: message, mayMerge }) };
	}
}

/** The plan that the work began from, as the form carries it. */
function readBase(text: string): Plan | null {
	try {
		const read = readPlan(JSON.parse(text));
		return read.ok ? read.plan : null;
	} catch {
		return null;
	}
}

/** Carries the faults of a plan out of its transaction. */
class PlanWrong extends Error {
	constructor(readonly faults: PlanFault[]) {
		super('the plan is wrong');
	}
}

const pathOf = (event: RequestEvent, version: number) =>
	`/desk/${event.params.operator}/sites/${event.params.site}/plan/${version}`;

export const actions: Actions = {
	save: async (event) => {
		const version = Number(event.params.version);
		const answer = await withPlan(event, (tx, { plan, sent: { revision } }) =>
			savePlan(tx, { slug: event.params.site, version, revision, body: plan })
		);
		if (answer.failed) return answer.failed;
		redirect(303, `${pathOf(event, version)}?saved`);
	},
	merge: async (event) => {
		const version = Number(event.params.version);
		const answer = await withPlan(event, (tx, { plan, sent }) => {
			const base = readBase(sent.base);
			if (!base) throw new Refusal('invalid', 'What you began from is not known any more.');
			return mergePlan(tx, { slug: event.params.site, version, base, mine: plan });
		});
		if (answer.failed) return answer.failed;
		const { plan, theirs, revision, taken, clashes } = answer.done;
		return {
			...back({ fields: fieldsFromPlan(plan), revision, base: JSON.stringify(theirs) }),
			merged: { taken, clashes: clashes.map((clash) => mergeWords(clash)) }
		};
	},
	copy: async (event) => {
		const answer = await withPlan(event, (tx, { plan }) => addPlan(tx, event.params.site, plan));
		if (answer.failed) return answer.failed;
		redirect(303, `${pathOf(event, answer.done)}?saved`);
	}
};

/** A clash in words, with what they have where it is a number. */
function mergeWords(clash: Clash): string {
	const theirs = Object.values(clash.theirs ?? {});
	const short = clash.kind === 'changed' && theirs.every((value) => typeof value !== 'object');
	return `${clashWords(clash)}${short ? ` Theirs: ${theirs.map((value) => value ?? 'none').join(' to ')}.` : ''}`;
}
