import { createHmac, timingSafeEqual } from 'node:crypto';
import { env } from '../env';

/**
 * The key in a visitor's link: who has it may see and cancel that one order. It follows from the
 * order's id and the installation's secret, so that every letter can carry the link and none is stored.
 */
export function visitorKey(operatorId: string, orderId: string): string {
	return createHmac('sha256', Buffer.from(env().SECRET_KEY, 'base64'))
		.update(`order ${operatorId} ${orderId}`)
		.digest('base64url')
		.slice(0, 27);
}

/** Whether a key is the order's; takes the same time for every wrong one. */
export function isVisitorKey(operatorId: string, orderId: string, key: string): boolean {
	const right = Buffer.from(visitorKey(operatorId, orderId));
	const given = Buffer.from(key);
	return given.length === right.length && timingSafeEqual(given, right);
}

/** The address at which a visitor sees and cancels an order. */
export function visitorPath(operator: { id: string; slug: string }, orderId: string): string {
	return `/at/${operator.slug}/order/${orderId}/${visitorKey(operator.id, orderId)}`;
}
