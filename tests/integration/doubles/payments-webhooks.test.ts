import { afterEach, beforeEach, expect, test } from 'vitest';
import { order, startWorld, type World } from './payment-helpers.ts';

let world: World;
beforeEach(async () => {
	world = await startWorld();
});
afterEach(() => world.stop());

async function payOne(): Promise<void> {
	const session = await world.stripe.checkout.sessions.create(order(1000));
	await world.helper('POST', `checkout/${session.id}/pay`, {});
}

test('an event is sent again until it is taken', async () => {
	world.shop.answer(503);
	await payOne();
	await world.helper('POST', 'webhooks/flush');
	expect(world.shop.refused.length).toBeGreaterThanOrEqual(4);
	const [newest] = (await world.stripe.events.list({ type: 'checkout.session.completed' })).data;
	expect(newest?.pending_webhooks).toBe(1);
	world.shop.answer(200);
	await world.helper('POST', 'webhooks/flush');
	expect(new Set(world.shop.types())).toEqual(
		new Set([
			'payment_intent.created',
			'charge.succeeded',
			'payment_intent.succeeded',
			'checkout.session.completed'
		])
	);
	const after = await world.stripe.events.retrieve(String(newest?.id));
	expect(after.pending_webhooks).toBe(0);
	expect((await world.stripe.events.list({ delivery_success: true })).data).toHaveLength(4);
});

test('without help the second try comes by itself', async () => {
	world.shop.answer(500);
	await payOne();
	await world.helper('POST', 'webhooks/flush');
	world.shop.answer(200);
	await world.shop.until((events) => events.length === 4);
});

test('events come twice or in reverse when asked', async () => {
	await world.helper('POST', 'faults', [
		{ match: 'checkout.session.completed', fault: 'duplicate-webhook', times: 1 }
	]);
	await payOne();
	await world.shop.until((events) => events.length === 8);
	const ids = world.shop.received.map(({ event }) => event.id);
	expect(new Set(ids).size).toBe(4);

	await world.helper('POST', 'faults', [
		{ match: 'POST /v1/checkout/sessions', fault: 'reorder-webhooks', times: 1 }
	]);
	await payOne();
	await world.shop.until((events) => events.length === 12);
	expect(world.shop.types().slice(8)).toEqual([
		'checkout.session.completed',
		'payment_intent.succeeded',
		'charge.succeeded',
		'payment_intent.created'
	]);
});

test('an event of an operator’s account names it and shows the object as it was then', async () => {
	const account = await world.account();
	const on = { stripeAccount: account };
	const session = await world.stripe.checkout.sessions.create(order(1000), on);
	const { body } = await world.helper('POST', `checkout/${session.id}/pay`, {});
	await world.stripe.refunds.create({ payment_intent: String(body.payment_intent) }, on);
	await world.shop.until((events) => events.some((e) => e.type === 'charge.refunded'));
	const charged = world.shop.received.find(({ event }) => event.type === 'charge.succeeded');
	expect(charged?.event.account).toBe(account);
	expect(charged?.event.data.object).toMatchObject({ refunded: false, amount_refunded: 0 });
	const refunded = world.shop.received.find(({ event }) => event.type === 'charge.refunded');
	expect(refunded?.event.data.object).toMatchObject({ refunded: true, amount_refunded: 1000 });
	expect((await world.stripe.events.list({}, on)).data.length).toBeGreaterThan(0);
});
