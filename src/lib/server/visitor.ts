import { error, type RequestEvent } from '@sveltejs/kit';
import { isVisitorKey } from './booking/visitor-key';
import { findOperatorBySlug, inTenant, type Origin, type TenantTx } from './db/transaction';
import { isUuid } from '../ids';

/** How a visitor stands in the trail: no name is known before an order. */
export const visitorOrigin = (event: Pick<RequestEvent, 'locals'>): Origin => ({
	actor: { kind: 'visitor', name: 'a visitor' },
	requestId: event.locals.requestId
});

export interface PublicOperator {
	id: string;
	name: string;
	slug: string;
}

/** The operator that a public address names, or the page of an unknown address. */
export async function publicOperator(event: Pick<RequestEvent, 'params'>): Promise<PublicOperator> {
	const found = await findOperatorBySlug(event.params['operator'] ?? '');
	if (!found || found.status !== 'open') error(404, 'There is nothing at this address.');
	return found;
}

/** Runs inside the operator of a public address, as a visitor. */
export async function asVisitor<T>(
	event: Pick<RequestEvent, 'params' | 'locals'>,
	run: (tx: TenantTx, operator: PublicOperator) => Promise<T>
): Promise<T> {
	const operator = await publicOperator(event);
	return inTenant(operator.id, visitorOrigin(event), (tx) => run(tx, operator));
}

/** The operator and order of a visitor's link; a wrong key is an unknown address. */
export async function orderOfLink(
	event: Pick<RequestEvent, 'params'>
): Promise<{ operator: PublicOperator; orderId: string }> {
	const operator = await publicOperator(event);
	const orderId = event.params['order'] ?? '';
	if (!isUuid(orderId) || !isVisitorKey(operator.id, orderId, event.params['key'] ?? '')) {
		error(404, 'There is no order at this address. Use the link in your letter.');
	}
	return { operator, orderId };
}
