import type { RequestHandler } from './$types';

/** The process answers; nothing else is asked. */
export const GET: RequestHandler = () =>
	new Response('ok\n', { headers: { 'cache-control': 'no-store' } });
