import { readiness } from '$lib/server/health';
import { inAdministration } from '$lib/server/http';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	await inAdministration(event, async () => {});
	return { state: await readiness(), uptimeSeconds: Math.round(process.uptime()) };
};
