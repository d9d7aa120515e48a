import { error } from '@sveltejs/kit';
import { demandPerson } from '$lib/server/http';
import type { LayoutServerLoad } from './$types';

export const load: LayoutServerLoad = (event) => {
	demandPerson(event as never);
	if (!event.locals.user?.platformAdmin) error(404, 'There is nothing at this address.');
};
