import { afterAll, beforeAll, expect, test } from 'vitest';
import { errorOf, order, startWorld, type World } from './payment-helpers.ts';

let world: World;
beforeAll(async () => {
	world = await startWorld();
});
afterAll(() => world.stop());

test('a session is paid, tells so by the API, and sends signed events in their order', async () => {
	const { stripe, helper, shop } = world;
	const session = await stripe.checkout.sessions.create(
		order(2450, { client_reference_id: 'order-1', metadata: { order: '1' } })
	);
	expect(session).toMatchObject({
		status: 'open',
		payment_status: 'unpaid',
		amount_total: 2450,
		currency: 'eur',
		payment_intent: null,
		metadata: { order: '1' }
	});
	expect(session.url).toContain(`/pay/${session.id}`);

	const paid = await helper('POST', `checkout/${session.id}/pay`, { card: '4242424242424242' });
	expect(paid.status).toBe(200);
	expect(paid.body).toMatchObject({ id: session.id, status: 'complete', payment_status: 'paid' });

	const seen = await stripe.checkout.sessions.retrieve(session.id, {
		expand: ['payment_intent.latest_charge.balance_transaction', 'line_items']
	});
	expect(seen).toMatchObject({
		status: 'complete',
		customer_details: { email: 'visitor@example.test' },
		payment_intent: {
			status: 'succeeded',
			amount_received: 2450,
			latest_charge: {
				paid: true,
				balance_transaction: { amount: 2450, fee: 62, net: 2388, type: 'charge' }
			}
		},
		line_items: { data: [{ description: 'Places at 08:10', amount_total: 2450 }] }
	});
	await shop.until((events) => events.some((e) => e.type === 'checkout.session.completed'));
	expect(shop.types()).toEqual([
		'payment_intent.created',
		'charge.succeeded',
		'payment_intent.succeeded',
		'checkout.session.completed'
	]);
	const event = shop.received.at(-1)?.event;
	expect(event?.data.object).toMatchObject({ id: session.id, payment_status: 'paid' });
	expect(event?.account).toBeUndefined();

	const again = await helper('POST', `checkout/${session.id}/pay`, { card: '4242424242424242' });
	expect(again.status).toBe(400);
	expect(
		(await stripe.charges.list({ payment_intent: String(paid.body.payment_intent) })).data
	).toHaveLength(1);
});

test.each([
	['4000000000000002', 'generic_decline', 'Your card was declined.'],
	['4000000000009995', 'insufficient_funds', 'Your card has insufficient funds.']
])('card %s is refused with %s, and the session can still be paid', async (card, code, message) => {
	const { stripe, helper } = world;
	const session = await stripe.checkout.sessions.create(order(1000));
	const refused = await helper('POST', `checkout/${session.id}/pay`, { card });
	expect(refused.status).toBe(402);
	expect(refused.body.error).toMatchObject({
		type: 'card_error',
		code: 'card_declined',
		decline_code: code,
		message,
		payment_intent: { status: 'requires_payment_method' }
	});
	expect(await stripe.checkout.sessions.retrieve(session.id)).toMatchObject({ status: 'open' });
	const paid = await helper('POST', `checkout/${session.id}/pay`, { card: '4242424242424242' });
	expect(paid.body).toMatchObject({ status: 'complete' });
});

test('a card whose bank asks first pays when the question is passed, else not', async () => {
	const { stripe, helper } = world;
	const session = await stripe.checkout.sessions.create(order(1000));
	const card = '4000002500003155';
	const failed = await helper('POST', `checkout/${session.id}/pay`, { card, challenge: 'fail' });
	expect(failed.status).toBe(402);
	expect(failed.body.error).toMatchObject({ code: 'payment_intent_authentication_failure' });
	const passed = await helper('POST', `checkout/${session.id}/pay`, { card });
	expect(passed.body).toMatchObject({ status: 'complete' });
});

test('the page pays without a script and leads back to the shop', async () => {
	const { stripe } = world;
	const session = await stripe.checkout.sessions.create(order(1250));
	const url = String(session.url);
	const page = await (await fetch(url)).text();
	expect(page).toContain('Pay 12.50 EUR');
	expect(page).not.toContain('<script');
	const post = (form: Record<string, string>) =>
		fetch(url, { method: 'POST', redirect: 'manual', body: new URLSearchParams(form) });

	const declined = await post({ number: '4000 0000 0000 0002' });
	expect(declined.status).toBe(402);
	expect(await declined.text()).toContain('Your card was declined.');

	const asked = await post({ number: '4000002760003184', email: 'other@example.test' });
	expect(asked.status).toBe(200);
	expect(await asked.text()).toContain('Complete authentication');

	const passed = await post({
		card: '4000002760003184',
		email: 'other@example.test',
		challenge: 'pass'
	});
	expect(passed.status).toBe(303);
	expect(passed.headers.get('location')).toBe(`http://127.0.0.1:9/done?session=${session.id}`);
	const after = await stripe.checkout.sessions.retrieve(session.id);
	expect(after).toMatchObject({
		status: 'complete',
		customer_details: { email: 'other@example.test' }
	});
	expect(await (await fetch(url)).text()).toContain('This is paid.');
});

test('a session ends when told so and can not be paid after that', async () => {
	const { stripe, helper, shop } = world;
	const session = await stripe.checkout.sessions.create(order(1000));
	const expired = await stripe.checkout.sessions.expire(session.id);
	expect(expired).toMatchObject({ status: 'expired', url: null });
	await shop.until((events) => events.some((e) => e.type === 'checkout.session.expired'));
	expect((await helper('POST', `checkout/${session.id}/pay`, {})).status).toBe(400);
	const again = await errorOf(stripe.checkout.sessions.expire(session.id));
	expect(again).toMatchObject({ statusCode: 400, type: 'StripeInvalidRequestError' });
});

test('a session lasts at least thirty minutes and at most a day', async () => {
	const { stripe } = world;
	const now = Math.floor(Date.now() / 1000);
	for (const seconds of [29 * 60, 25 * 3600]) {
		const error = await errorOf(
			stripe.checkout.sessions.create(order(1000, { expires_at: now + seconds }))
		);
		expect(error).toMatchObject({ statusCode: 400, param: 'expires_at' });
	}
	const fine = await stripe.checkout.sessions.create(order(1000, { expires_at: now + 31 * 60 }));
	expect(fine.expires_at).toBe(now + 31 * 60);
});

test('amounts follow the currency: least amounts, none of a yen’s parts, tens of fils', async () => {
	const { stripe } = world;
	const priced = (currency: string, unitAmount: number) =>
		stripe.checkout.sessions.create(
			order(0, {
				line_items: [
					{
						quantity: 1,
						price_data: { currency, unit_amount: unitAmount, product_data: { name: 'Place' } }
					}
				]
			})
		);
	expect(await errorOf(priced('eur', 49))).toMatchObject({ code: 'amount_too_small' });
	expect(await errorOf(priced('jpy', 49))).toMatchObject({ code: 'amount_too_small' });
	expect(await errorOf(priced('kwd', 1005))).toMatchObject({ statusCode: 400 });
	expect(await errorOf(priced('xxx', 1000))).toMatchObject({ statusCode: 400 });
	expect(await errorOf(priced('eur', 100_000_000))).toMatchObject({ code: 'amount_too_large' });
	expect(await priced('jpy', 50)).toMatchObject({ amount_total: 50, currency: 'jpy' });
	expect(await priced('kwd', 1010)).toMatchObject({ amount_total: 1010, currency: 'kwd' });
});

test('lists page in both directions, newest first, and filter', async () => {
	const { stripe } = world;
	const account = await world.account();
	const on = { stripeAccount: account };
	const ids: string[] = [];
	for (let i = 0; i < 5; i++) {
		ids.unshift((await stripe.checkout.sessions.create(order(1000 + i), on)).id);
	}
	const first = await stripe.checkout.sessions.list({ limit: 2 }, on);
	expect(first.data.map((one) => one.id)).toEqual(ids.slice(0, 2));
	expect(first.has_more).toBe(true);
	const next = await stripe.checkout.sessions.list({ limit: 3, starting_after: ids[1] }, on);
	expect(next.data.map((one) => one.id)).toEqual(ids.slice(2));
	expect(next.has_more).toBe(false);
	const before = await stripe.checkout.sessions.list({ limit: 2, ending_before: ids[3] }, on);
	expect(before.data.map((one) => one.id)).toEqual(ids.slice(1, 3));
	const all: string[] = [];
	for await (const one of stripe.checkout.sessions.list({ limit: 2 }, on)) all.push(one.id);
	expect(all).toEqual(ids);
	const future = Math.floor(Date.now() / 1000) + 60;
	expect((await stripe.checkout.sessions.list({ created: { gt: future } }, on)).data).toEqual([]);
	expect((await stripe.checkout.sessions.list({ status: 'open' }, on)).data).toHaveLength(5);
	expect(await errorOf(stripe.checkout.sessions.list({ limit: 101 }, on))).toMatchObject({
		param: 'limit'
	});
});
