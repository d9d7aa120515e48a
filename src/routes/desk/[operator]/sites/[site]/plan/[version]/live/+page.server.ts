import { redirect } from '@sveltejs/kit';
import { decideSchema, mostDecisions } from '$lib/schemas/decide';
import { deskOrigin, emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { countComing } from '$lib/server/sites/conflict-basis';
import { lookAtConflicts, withBand } from '$lib/server/sites/conflicts';
import { chosenFrom, goLive } from '$lib/server/sites/decide';
import { liveObstacle } from '$lib/server/sites/plans';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const now = new Date();
	const asked = { slug: event.params.site, version: Number(event.params.version) };
	const look = (await orError(lookAtConflicts(deskOrigin(event), asked, now)))!;
	const coming = await orError(inDesk(event, (tx) => countComing(tx, asked.slug, now)));
	const { site, plan } = look;
	const conflicts = [...look.undecided, ...look.kept.map(({ conflict }) => conflict)].sort(
		(a, b) => a.startsAt.getTime() - b.startsAt.getTime()
	);
	return {
		site: {
			slug: site.slug,
			name: site.name,
			currency: site.currency,
			timeZone: site.timeZone
		},
		version: plan.version,
		state: plan.state,
		obstacle: liveObstacle(site, plan.body),
		coming,
		conflicts: conflicts.slice(0, mostDecisions).map((one) => withBand(site, one)),
		left: Math.max(0, conflicts.length - mostDecisions),
		digest: look.digest ?? '',
		form: await emptyForm(decideSchema, { digest: look.digest ?? '' })
	};
};

export const actions: Actions = {
	default: (event) =>
		handleForm(event, decideSchema, async (sent) => {
			const asked = { slug: event.params.site, version: Number(event.params.version) };
			const done = await goLive(deskOrigin(event), asked, chosenFrom(sent), new Date());
			const here = `/desk/${event.params.operator}/sites/${event.params.site}`;
			const decided = done.kept + done.slotMoveIds.length > 0 || done.weatherCallId !== null;
			redirect(303, decided ? `${here}/conflicts?done` : `${here}/windows`);
		})
};
