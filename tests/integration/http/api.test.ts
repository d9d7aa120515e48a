import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import Stripe from 'stripe';
import { orderAnswer, problem, slotsAnswer, windowsAnswer } from '../../../src/lib/schemas/api.ts';
import { visitorKey } from '../../../src/lib/server/booking/visitor-key.ts';
import { adminQuery } from '../../support/database.ts';
import { startTestWeb, type TestProcess } from '../../support/processes.ts';
import { buy, hold, openShop, type Shop } from '../../support/shop.ts';

let web: TestProcess;
let shop: Shop;
beforeAll(async () => {
	[web, shop] = [await startTestWeb(), await openShop()];
}, 120_000);
afterAll(() => web?.stop());

const get = (path: string, headers: Record<string, string> = {}) =>
	fetch(`${web.address}/api/v1${path}`, { headers });
const base = () => `/operators/${shop.slug}/sites/${shop.site.slug}`;

describe('slots', () => {
	test('tell the places left, and a browser that knows them gets no more than that', async () => {
		const one = shop.slots[0]!;
		await hold(shop, one.id, { adults: 2 });
		const answer = await get(`${base()}/slots`);
		const read = slotsAnswer.parse(await answer.json());
		expect(read.slots.find(({ id }) => id === one.id)?.placesLeft).toBe(one.capacity - 2);
		const etag = answer.headers.get('etag')!;
		expect((await get(`${base()}/slots`, { 'if-none-match': etag })).status).toBe(304);
		await hold(shop, one.id);
		expect((await get(`${base()}/slots`, { 'if-none-match': etag })).status).toBe(200);
	});

	test('carry nothing of who has bought', async () => {
		await buy(shop, shop.slots[1]!.id, { email: 'secret@visitors.example.org' });
		expect(await (await get(`${base()}/slots`)).text()).not.toMatch(/secret|Vera/);
	});
});

test('windows may be kept by caches', async () => {
	const date = shop.slots[0]!.localDate;
	const answer = await get(`${base()}/windows?from=${date}&to=${date}`);
	expect(answer.headers.get('cache-control')).toBe('public, max-age=300');
	const read = windowsAnswer.parse(await answer.json());
	expect(read.windows[0]).toMatchObject({ zone: 'Terrace', date });
});

describe('an order', () => {
	test('is told to whoever holds its key, and to nobody else', async () => {
		const orderId = await hold(shop, shop.slots[2]!.id);
		const key = visitorKey(shop.operatorId, orderId);
		const answer = await get(`/operators/${shop.slug}/orders/${orderId}/${key}`);
		expect(orderAnswer.parse(await answer.json())).toMatchObject({ status: 'pending', places: 1 });
		const wrong = await get(`/operators/${shop.slug}/orders/${orderId}/${key.slice(0, -1)}x`);
		expect(wrong.status).toBe(404);
		const other = await hold(shop, shop.slots[2]!.id);
		expect((await get(`/operators/${shop.slug}/orders/${other}/${key}`)).status).toBe(404);
	});
});

describe('errors are problem details', () => {
	test.each([
		['/operators/nobody-here/sites/x/slots', 404],
		['/operators/{op}/sites/nowhere/slots', 404],
		['/operators/{op}/sites/{site}/slots?from=yesterday', 400],
		['/operators/{op}/sites/{site}/slots?from=2027-05-02&to=2027-05-01', 400],
		["/operators/{op}/sites/{site}/windows?from=2027-03-01'--", 400],
		['/operators/{op}/sites/{site}/windows?from=2027-13-99', 400],
		['/operators/{op}/sites/{site}/windows?from=2027-01-01&to=2029-01-01', 400],
		['/desk/{op}/computations/00000000-0000-7000-8000-000000000000', 401]
	])('%s', async (path, status) => {
		const answer = await get(path.replace('{op}', shop.slug).replace('{site}', shop.site.slug));
		expect(answer.status).toBe(status);
		expect(answer.headers.get('content-type')).toBe('application/problem+json');
		expect(problem.parse(await answer.json()).status).toBe(status);
	});
});

describe('webhooks', () => {
	const send = (body: string, signature: string) =>
		fetch(`${web.address}/api/v1/payments/webhook`, {
			method: 'POST',
			body,
			headers: { 'stripe-signature': signature, 'content-type': 'application/json' }
		});
	const sign = (payload: string, secret = process.env.PAYMENT_WEBHOOK_SECRET!) =>
		Stripe.webhooks.generateTestHeaderString({ payload, secret });
	const event = (id: string) =>
		JSON.stringify({
			id,
			object: 'event',
			type: 'checkout.session.completed',
			account: shop.accountId,
			data: { object: { id: 'cs_test_none' } }
		});
	const kept = (id: string) => adminQuery(`select id from payment_event where event_id = $1`, [id]);

	test('are kept once, however often they come', async () => {
		const body = event('evt_http_twice');
		const answers = await Promise.all([1, 2, 3].map(() => send(body, sign(body))));
		expect(answers.map(({ status }) => status)).toEqual([204, 204, 204]);
		expect(await kept('evt_http_twice')).toHaveLength(1);
	});

	test('with a signature that is not the service’s are refused and not kept', async () => {
		const body = event('evt_http_forged');
		expect((await send(body, sign(body, 'whsec_wrong'))).status).toBe(400);
		expect((await send(body, 'nonsense')).status).toBe(400);
		expect((await send('{', sign('{'))).status).toBe(400);
		expect(await kept('evt_http_forged')).toEqual([]);
	});
});
