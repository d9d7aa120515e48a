import { z } from 'zod';
import { readTrail } from '$lib/server/audit/trail';
import { inDesk, orError } from '$lib/server/http';
import type { PageServerLoad } from './$types';

const day = z.iso.date();

/** Filters come in the address, so that a page of the trail can be linked. */
const filterSchema = z.object({
	who: z.string().trim().max(100).catch(''),
	what: z.string().trim().max(100).catch(''),
	from: day.or(z.literal('')).catch(''),
	to: day.or(z.literal('')).catch(''),
	after: z.uuid().or(z.literal('')).catch('')
});

export const load: PageServerLoad = async (event) => {
	const query = event.url.searchParams;
	const filter = filterSchema.parse(
		Object.fromEntries(Object.keys(filterSchema.shape).map((key) => [key, query.get(key) ?? '']))
	);
	const page = await orError(
		inDesk(event, (tx) =>
			readTrail(tx, {
				...(filter.who ? { who: filter.who } : {}),
				...(filter.what ? { what: filter.what } : {}),
				...(filter.from ? { from: new Date(`${filter.from}T00:00:00Z`) } : {}),
				// The last day counts whole.
				...(filter.to ? { to: new Date(Date.parse(`${filter.to}T00:00:00Z`) + 86_400_000) } : {}),
				...(filter.after ? { after: filter.after } : {}),
				most: 50
			})
		)
	);
	return { ...page, filter };
};
