import { z } from 'zod';
import { inDesk, orError } from '$lib/server/http';
import { listLetters } from '$lib/server/mail/read';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const after = z
		.uuid()
		.optional()
		.catch(undefined)
		.parse(event.url.searchParams.get('after') ?? undefined);
	return orError(inDesk(event, (tx) => listLetters(tx, { ...(after ? { after } : {}), most: 50 })));
};
