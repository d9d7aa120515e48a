import { listOrders } from '$lib/server/booking/orders';
import { inDesk, orError } from '$lib/server/http';
import { isUuid } from '$lib/ids';
import type { PageServerLoad } from './$types';

const pageRows = 50;

export const load: PageServerLoad = async (event) => {
	const query = event.url.searchParams;
	const search = (query.get('search') ?? '').trim().slice(0, 100);
	const id = (name: string) => {
		const value = query.get(name) ?? '';
		return isUuid(value) ? value : undefined;
	};
	const [slotId, before] = [id('slot'), id('before')];
	const found = await orError(
		inDesk(event, (tx) =>
			listOrders(tx, {
				most: pageRows,
				...(search ? { search } : {}),
				...(slotId ? { slotId } : {}),
				...(before ? { before } : {})
			})
		)
	);
	return { ...found, search, slotId: slotId ?? null };
};
