import { problemResponse } from '$lib/server/api';
import { takeEvent } from '$lib/server/payments/events';
import { verifyEvent } from '$lib/server/payments/gateway';
import type { RequestHandler } from './$types';

/** Where the payment service tells what happened. Kept first, handled by a job. */
export const POST: RequestHandler = async (event) => {
	const body = await event.request.text();
	const signature = event.request.headers.get('stripe-signature') ?? '';
	const told = verifyEvent(body, signature);
	if (!told) return problemResponse(event, 400, 'The signature is not the payment service’s.');
	await takeEvent(told);
	return new Response(null, { status: 204 });
};
