import { demandPerson } from '$lib/server/http';
import type { LayoutServerLoad } from './$types';

export const load: LayoutServerLoad = (event) => {
	const { name, email } = demandPerson(event as never);
	return { account: { name, email } };
};
