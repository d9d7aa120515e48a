import Stripe from 'stripe';
import { afterAll, afterEach, beforeAll, expect, test } from 'vitest';
import { errorOf, order, startWorld, type World } from './payment-helpers.ts';

let world: World;
beforeAll(async () => {
	world = await startWorld();
});
afterEach(() => world.helper('DELETE', 'faults'));
afterAll(() => world.stop());

/** A call as raw as the wire. */
function raw(path: string, form: string, headers: Record<string, string> = {}): Promise<Response> {
	return fetch(`${world.address}/v1/${path}`, {
		method: 'POST',
		headers: {
			authorization: 'Bearer sk_test_raw',
			'content-type': 'application/x-www-form-urlencoded',
			...headers
		},
		body: form
	});
}

async function errorBody(response: Response): Promise<Record<string, unknown>> {
	return ((await response.json()) as { error: Record<string, unknown> }).error;
}

test('a wrong key, no key and a foreign account are refused', async () => {
	const wrong = await raw('accounts', '', { authorization: 'Bearer sk_live_nothing' });
	expect(wrong.status).toBe(401);
	expect(await errorBody(wrong)).toMatchObject({ type: 'invalid_request_error' });
	expect((await raw('accounts', '', { authorization: '' })).status).toBe(401);
	const foreign = await errorOf(
		world.stripe.balance.retrieve({}, { stripeAccount: 'acct_of_nobody' })
	);
	expect(foreign).toMatchObject({ statusCode: 403, code: 'account_invalid' });
});

test('each answer names its request and echoes what it was asked with', async () => {
	const response = await raw('accounts', 'type=express', {
		'idempotency-key': 'echo-1',
		'stripe-version': '2026-01-01.test'
	});
	expect(response.headers.get('request-id')).toMatch(/^req_\w+$/);
	expect(response.headers.get('idempotency-key')).toBe('echo-1');
	expect(response.headers.get('stripe-version')).toBe('2026-01-01.test');
});

test('parameters are refused as the service refuses them, each named', async () => {
	const session = 'mode=payment&success_url=http://127.0.0.1:9/';
	const line = 'line_items[0][quantity]=1&line_items[0][price_data][currency]=eur';
	const product = 'line_items[0][price_data][product_data][name]=Place';
	const amount = 'line_items[0][price_data][unit_amount]=1000';
	const whole = `${session}&${line}&${product}&${amount}`;
	const cases: [string, string, string, string | undefined][] = [
		['checkout/sessions', `${whole}&colour=red`, 'colour', 'parameter_unknown'],
		[
			'checkout/sessions',
			`${whole}&line_items[0][colour]=red`,
			'line_items[0][colour]',
			'parameter_unknown'
		],
		['checkout/sessions', `${session}`, 'line_items', 'parameter_missing'],
		[
			'checkout/sessions',
			`${session}&${line}&${amount}&line_items[0][price_data][product_data][description]=x`,
			'line_items[0][price_data][product_data][name]',
			'parameter_missing'
		],
		[
			'checkout/sessions',
			`${session}&${line}&${product}&line_items[0][price_data][unit_amount]=12.5`,
			'line_items[0][price_data][unit_amount]',
			'parameter_invalid_integer'
		],
		['checkout/sessions', `${whole}&customer_email=`, 'customer_email', 'parameter_invalid_empty'],
		['checkout/sessions', `${whole}&customer_email=nobody`, 'customer_email', 'email_invalid'],
		['checkout/sessions', `${whole}&cancel_url=nowhere`, 'cancel_url', 'url_invalid'],
		['checkout/sessions', whole.replace('payment', 'rent'), 'mode', undefined],
		['checkout/sessions', `${session}&line_items=one`, 'line_items', undefined],
		['checkout/sessions', `${whole}&payment_intent_data=x`, 'payment_intent_data', undefined],
		[
			'refunds',
			'payment_intent=pi_1&refund_application_fee=maybe',
			'refund_application_fee',
			undefined
		],
		['refunds', 'payment_intent=pi_1&amount=0', 'amount', 'parameter_invalid_integer'],
		['refunds', 'payment_intent=pi_unknown', 'payment_intent', 'resource_missing'],
		['account_links', 'type=account_onboarding', 'account', 'parameter_missing']
	];
	for (const [path, form, param, code] of cases) {
		const error = await errorBody(await raw(path, form));
		expect({ form, ...error }).toMatchObject({ type: 'invalid_request_error', param });
		expect({ form, code: error.code }).toEqual({ form, code });
	}
	expect((await raw('checkout/sessions', whole)).status).toBe(200);
	expect((await raw('nothing', '')).status).toBe(404);
	const json = await raw('refunds', '{}', { 'content-type': 'application/json' });
	expect(json.status).toBe(400);
});

test('a key replays its answer, refuses other parameters and stays within its account', async () => {
	const account = await world.account();
	const key = { idempotencyKey: 'order-7' };
	const first = await world.stripe.checkout.sessions.create(order(1000), key);
	const second = await world.stripe.checkout.sessions.create(order(1000), key);
	expect(second.id).toBe(first.id);
	expect(first.lastResponse.headers['idempotent-replayed']).toBeUndefined();
	expect(second.lastResponse.headers['idempotent-replayed']).toBe('true');
	expect(second.lastResponse.headers['original-request']).toBe(first.lastResponse.requestId);
	const other = await errorOf(world.stripe.checkout.sessions.create(order(1001), key));
	expect(other).toBeInstanceOf(Stripe.errors.StripeIdempotencyError);
	expect(other.statusCode).toBe(400);
	const elsewhere = await world.stripe.checkout.sessions.create(order(1000), {
		...key,
		stripeAccount: account
	});
	expect(elsewhere.id).not.toBe(first.id);
	const path = await errorOf(world.stripe.accounts.create({ type: 'express' }, key));
	expect(path).toBeInstanceOf(Stripe.errors.StripeIdempotencyError);
});

test('a faulty call keeps its key free, a refused act does not', async () => {
	const key = { idempotencyKey: 'refund-1' };
	expect(await errorOf(world.stripe.refunds.create({ amount: 0 }, key))).toMatchObject({
		code: 'parameter_invalid_integer'
	});
	const refused = await errorOf(world.stripe.refunds.create({ payment_intent: 'pi_x' }, key));
	expect(refused).toMatchObject({ code: 'resource_missing' });
	const replayed = await errorOf(world.stripe.refunds.create({ payment_intent: 'pi_x' }, key));
	expect(replayed.headers?.['idempotent-replayed']).toBe('true');
});

test('one key used twice at a time is refused the second time', async () => {
	await world.helper('POST', 'faults', [
		{ match: 'POST /v1/checkout/sessions', fault: 'delay', times: 1, ms: 300 }
	]);
	const key = { idempotencyKey: 'twice' };
	const outcomes = await Promise.allSettled([
		world.stripe.checkout.sessions.create(order(1000), key),
		world.stripe.checkout.sessions.create(order(1000), key)
	]);
	const refused = outcomes.filter((one) => one.status === 'rejected');
	expect(refused).toHaveLength(1);
	expect(refused[0]?.reason).toMatchObject({ statusCode: 409, code: 'idempotency_key_in_use' });
});

test('an answer dropped after the work is had again with the same key, and the work is done once', async () => {
	const account = await world.account();
	const on = { stripeAccount: account };
	const session = await world.stripe.checkout.sessions.create(order(3000), on);
	const { body } = await world.helper('POST', `checkout/${session.id}/pay`, {});
	await world.helper('POST', 'faults', [
		{ match: 'POST /v1/refunds', fault: 'drop-after-commit', times: 2 }
	]);
	const refund = { payment_intent: String(body.payment_intent), amount: 1000 };
	const impatient = await errorOf(
		world.stripe.refunds.create(refund, { ...on, idempotencyKey: 'drop' })
	);
	expect(impatient).toBeInstanceOf(Stripe.errors.StripeConnectionError);
	const patient = world.client({ maxNetworkRetries: 3 });
	const made = await patient.refunds.create(refund, { ...on, idempotencyKey: 'drop' });
	expect(made.lastResponse.headers['idempotent-replayed']).toBe('true');
	expect((await world.stripe.refunds.list({}, on)).data.map((one) => one.id)).toEqual([made.id]);
});

test('server faults and rate limits come as often as asked and do no work', async () => {
	await world.helper('POST', 'faults', [
		{ match: 'POST /v1/accounts', fault: '500', times: 1 },
		{ match: 'POST /v1/accounts', fault: '429', times: 1 }
	]);
	const before = (await world.stripe.accounts.list({ limit: 100 })).data.length;
	const create = () => world.stripe.accounts.create({ type: 'express' });
	expect(await errorOf(create())).toMatchObject({ statusCode: 500, type: 'StripeAPIError' });
	expect(await errorOf(create())).toBeInstanceOf(Stripe.errors.StripeRateLimitError);
	await create();
	expect((await world.stripe.accounts.list({ limit: 100 })).data.length).toBe(before + 1);
	expect((await world.helper('GET', 'faults')).body).toEqual([]);
	expect((await world.helper('POST', 'faults', [{ match: 'x', fault: 'flood' }])).status).toBe(400);
});

test('metadata is merged, taken away by empty texts, and bounded', async () => {
	const account = await world.stripe.accounts.create({
		type: 'express',
		metadata: { operator: '1', colour: 'red' }
	});
	const updated = await world.stripe.accounts.update(account.id, {
		metadata: { colour: '', town: 'Ulm' }
	});
	expect(updated.metadata).toEqual({ operator: '1', town: 'Ulm' });
	const long = await errorOf(
		world.stripe.accounts.update(account.id, { metadata: { text: 'x'.repeat(501) } })
	);
	expect(long).toMatchObject({ param: 'metadata[text]' });
	const none = await world.stripe.accounts.update(account.id, { metadata: '' });
	expect(none.metadata).toEqual({});
});

test('what can not be expanded is said', async () => {
	const session = await world.stripe.checkout.sessions.create(order(1000));
	const error = await errorOf(
		world.stripe.checkout.sessions.retrieve(session.id, { expand: ['weather'] })
	);
	expect(error).toMatchObject({ statusCode: 400, param: 'expand' });
});
