import { json } from '@sveltejs/kit';
import { readiness } from '$lib/server/health';
import type { RequestHandler } from './$types';

/** Whether the process can do its work; 503 when not. */
export const GET: RequestHandler = async () => {
	const { ready, database, migrations, queue } = await readiness();
	return json(
		{ ready, database, migrations, queue },
		{ status: ready ? 200 : 503, headers: { 'cache-control': 'no-store' } }
	);
};
