import { error } from '@sveltejs/kit';
import { timingSafeEqual } from 'node:crypto';
import { env } from '$lib/server/env';
import { hashToken } from '$lib/server/auth/tokens';
import { readiness } from '$lib/server/health';
import { registry } from '$lib/server/metrics';
import type { RequestHandler } from './$types';

const loopback = new Set(['127.0.0.1', '::1', '::ffff:127.0.0.1']);

/** Prometheus metrics: with METRICS_TOKEN for its bearer, without it for loopback alone. */
export const GET: RequestHandler = async ({ request, getClientAddress }) => {
	const wanted = env().METRICS_TOKEN;
	const allowed = wanted
		? sameToken(request.headers.get('authorization') ?? '', `Bearer ${wanted}`)
		: loopback.has(getClientAddress());
	if (!allowed) error(404, 'There is nothing at this address.');
	await readiness();
	return new Response(await registry.metrics(), {
		headers: { 'content-type': registry.contentType, 'cache-control': 'no-store' }
	});
};

function sameToken(given: string, wanted: string): boolean {
	// Hashes have one length, whatever was given.
	return timingSafeEqual(Buffer.from(hashToken(given)), Buffer.from(hashToken(wanted)));
}
