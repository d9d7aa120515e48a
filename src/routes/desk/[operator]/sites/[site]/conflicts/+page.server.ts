import { redirect } from '@sveltejs/kit';
import { decideSchema, mostDecisions } from '$lib/schemas/decide';
import { listSlotMoves } from '$lib/server/booking/move-slot';
import { deskOrigin, emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { lookAtConflicts, withBand } from '$lib/server/sites/conflicts';
import { chosenFrom, decideConflicts } from '$lib/server/sites/decide';
import { demandSite } from '$lib/server/sites/sites';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const asked = { slug: event.params.site, version: null };
	const look = await orError(lookAtConflicts(deskOrigin(event), asked, new Date()));
	const { site, moves } = await orError(
		inDesk(event, async (tx) => {
			const site = await demandSite(tx, event.params.site);
			return { site, moves: await listSlotMoves(tx, site.id) };
		})
	);
	// A slot that is kept is decided about anew when it is asked for.
	const again = event.url.searchParams.get('slot');
	const anew = (look?.kept ?? []).filter(({ conflict }) => conflict.slotId === again);
	const conflicts = [...(look?.undecided ?? []), ...anew.map(({ conflict }) => conflict)];
	return {
		site: {
			slug: site.slug,
			name: site.name,
			currency: site.currency,
			timeZone: site.timeZone
		},
		version: look?.plan.version ?? null,
		conflicts: conflicts.slice(0, mostDecisions).map((one) => withBand(site, one)),
		left: Math.max(0, conflicts.length - mostDecisions),
		kept: (look?.kept ?? []).filter(({ conflict }) => conflict.slotId !== again),
		moves,
		digest: look?.digest ?? '',
		form: await emptyForm(decideSchema, { digest: look?.digest ?? '' })
	};
};

export const actions: Actions = {
	default: (event) =>
		handleForm(event, decideSchema, async (sent) => {
			await decideConflicts(deskOrigin(event), event.params.site, chosenFrom(sent), new Date());
			redirect(303, `/desk/${event.params.operator}/sites/${event.params.site}/conflicts?done`);
		})
};
