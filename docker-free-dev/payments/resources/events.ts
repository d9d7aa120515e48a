import type Stripe from 'stripe';
import { route, seconds, type Call, type Route } from '../call.ts';
import { missingResource } from '../errors.ts';
import { newId } from '../ids.ts';
import { page } from '../lists.ts';
import { EVENT_LIST, RETRIEVE } from '../params/tables.ts';

/** Notes that something happened: kept as an event and put on its way to the webhook address. */
export function emit(
	call: Call,
	type: Stripe.Event.Type,
	object: object,
	owner: string = call.owner
): void {
	const id = newId('evt');
	const base = {
		id,
		object: 'event' as const,
		...(owner === call.platform ? {} : { account: owner }),
		api_version: call.apiVersion,
		created: seconds(call),
		// As it stands now: what happens to the object later must not show in this event.
		data: {
			object: structuredClone(JSON.parse(JSON.stringify(object))) as Stripe.Event.Data.Object
		},
		livemode: false,
		pending_webhooks: 1,
		request: { id: call.requestId, idempotency_key: call.idempotencyKey },
		type
	};
	call.tx.put('event', owner, id, base as Stripe.Event);
	call.tx.put('delivery', owner, id, {
		event: id,
		causes: [...call.causes, type],
		attempts: 0,
		dueAtMs: call.nowMs
	});
}

export const eventRoutes: Route[] = [
	route<Stripe.EventListParams>('GET', '/v1/events', EVENT_LIST, (call, params) => {
		const wanted = params.types ?? (params.type === undefined ? undefined : [params.type]);
		const rows = call.tx.rows('event', call.owner).filter(({ value }) => {
			const delivered = value.pending_webhooks === 0;
			return (
				(!wanted || wanted.some((pattern) => fits(pattern, value.type))) &&
				(params.delivery_success === undefined || params.delivery_success === delivered)
			);
		});
		return page(rows, params, '/v1/events', (event) => event.created);
	}),
	route<object>('GET', '/v1/events/{id}', RETRIEVE, (call, _params, [id = '']) => {
		const event = call.tx.find('event', call.owner, id);
		if (!event) throw missingResource('event', id, 'id');
		return event;
	})
];

function fits(pattern: string, type: string): boolean {
	return pattern.endsWith('*') ? type.startsWith(pattern.slice(0, -1)) : pattern === type;
}
