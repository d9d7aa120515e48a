import { rightsOf } from '$lib/server/auth/rights';
import { refuseDesk } from '$lib/server/http';
import type { LayoutServerLoad } from './$types';

export const load: LayoutServerLoad = (event) => {
	const { membership } = event.locals;
	if (!membership) refuseDesk(event);
	return {
		desk: {
			name: membership.name,
			slug: membership.slug,
			role: membership.role,
			rights: rightsOf(membership.role)
		}
	};
};
