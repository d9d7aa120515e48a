import type { LayoutServerLoad } from './$types';

export const load: LayoutServerLoad = ({ locals }) => ({
	person: locals.user ? { name: locals.user.name, platformAdmin: locals.user.platformAdmin } : null
});
