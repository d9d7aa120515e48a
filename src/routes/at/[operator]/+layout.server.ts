import { publicOperator } from '$lib/server/visitor';
import type { LayoutServerLoad } from './$types';

export const load: LayoutServerLoad = async (event) => {
	const { name, slug } = await publicOperator(event);
	return { operator: { name, slug } };
};
