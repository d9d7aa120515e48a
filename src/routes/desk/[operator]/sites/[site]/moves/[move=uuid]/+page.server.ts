import { error } from '@sveltejs/kit';
import { demandSlotMove } from '$lib/server/booking/move-slot';
import { inDesk, orError } from '$lib/server/http';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const move = await orError(inDesk(event, (tx) => demandSlotMove(tx, event.params.move)));
	if (move.siteSlug !== event.params.site) error(404, 'There is no such move.');
	return { move };
};
