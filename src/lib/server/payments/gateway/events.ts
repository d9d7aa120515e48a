import Stripe from 'stripe';
import { env } from '../../env';
import { service } from './client';

/** An event as its names alone: what happened is asked of the service when it is handled. */
export interface ServiceEvent {
	eventId: string;
	type: string;
	accountId: string | null;
	objectId: string;
}

/**
 * Reads a webhook's body.
 * @returns null when the signature is not the service's, or too old
 */
export function verifyEvent(body: string, signature: string): ServiceEvent | null {
	let event: Stripe.Event;
	try {
		event = service().webhooks.constructEvent(body, signature, env().PAYMENT_WEBHOOK_SECRET);
	} catch (error) {
		if (error instanceof Stripe.errors.StripeSignatureVerificationError) return null;
		if (error instanceof SyntaxError) return null;
		throw error;
	}
	const object = event.data.object as { id?: unknown };
	return {
		eventId: event.id,
		type: event.type,
		accountId: event.account ?? null,
		objectId: typeof object.id === 'string' ? object.id : ''
	};
}
