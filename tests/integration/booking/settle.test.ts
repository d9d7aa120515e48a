import { eq } from 'drizzle-orm';
import { beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { settleOrder } from '../../../src/lib/server/booking/settle.ts';
import {
	payment,
	paymentEvent,
	refund,
	slot,
	ticket
} from '../../../src/lib/server/db/schema/index.ts';
import { handlePaymentEvent, takeEvent } from '../../../src/lib/server/payments/events.ts';
import { sendAskedRefund } from '../../../src/lib/server/payments/refunds.ts';
import { lettersTo } from '../../support/letters.ts';
import { newAddress } from '../../support/people.ts';
import { emptyQueue, jobWithKey } from '../../support/queue.ts';
import {
	atService,
	buy,
	clearFaults,
	hold,
	lapse,
	layFaults,
	openCheckoutOf,
	openShop,
	payAtService,
	readOrderRow,
	readSlotRow,
	type Shop
} from '../../support/shop.ts';

let shop: Shop;
let next = 0;
/** A slot of its own for each test. */
const freshSlot = () => shop.slots[next++]!;

beforeAll(async () => {
	shop = await openShop();
});
beforeEach(async () => {
	await emptyQueue();
	await clearFaults();
});

const ticketsOf = (orderId: string) =>
	shop.asOwner((tx) => tx.sql.query.ticket.findMany({ where: eq(ticket.orderId, orderId) }));
const paymentsOf = (orderId: string) =>
	shop.asOwner((tx) => tx.sql.query.payment.findMany({ where: eq(payment.orderId, orderId) }));
const refundsOf = (orderId: string) =>
	shop.asOwner((tx) => tx.sql.query.refund.findMany({ where: eq(refund.orderId, orderId) }));

async function sendRefunds(orderId: string): Promise<void> {
	for (const { id } of await refundsOf(orderId)) {
		await sendAskedRefund({ operatorId: shop.operatorId, refundId: id }, { number: 1, of: 25 });
	}
}

test('a paid order has its tickets, a receipt and a letter, once, whoever asks and however often', async () => {
	const email = newAddress();
	const orderId = await hold(shop, freshSlot().id, { adults: 2, children: 1, email });
	await payAtService(shop, orderId);
	const causes = ['return', 'event', 'return', 'event', 'hold_end', 'return'] as const;
	await Promise.all(causes.map((cause) => settleOrder(shop.operatorId, orderId, cause)));
	expect((await readOrderRow(shop, orderId)).status).toBe('paid');
	expect(await ticketsOf(orderId)).toHaveLength(3);
	expect(await paymentsOf(orderId)).toMatchObject([{ amountMinor: 3850, currency: 'EUR' }]);
	const letters = await lettersTo(email);
	expect(letters.map(({ kind }) => kind)).toEqual(['tickets']);
	for (const { code } of await ticketsOf(orderId)) {
		expect(letters[0]!.text.replaceAll('-', '')).toContain(code);
	}
});

test('an order can not become paid without its tickets', async () => {
	const orderId = await hold(shop, freshSlot().id);
	const work = shop.asOwner((tx) =>
		tx.sql.execute(`update "order" set status = 'paid' where id = '${orderId}'`)
	);
	await expect(work).rejects.toMatchObject({ constraint: 'order_paid_has_tickets' });
});

test('events doubled and reversed are handled once and come to the same', async () => {
	const orderId = await hold(shop, freshSlot().id);
	const session = await payAtService(shop, orderId);
	const base = { accountId: shop.accountId, objectId: session };
	const told = [
		{ ...base, eventId: `evt_expired_${orderId}`, type: 'checkout.session.expired' },
		{ ...base, eventId: `evt_done_${orderId}`, type: 'checkout.session.completed' },
		{ ...base, eventId: `evt_done_${orderId}`, type: 'checkout.session.completed' }
	];
	await Promise.all(told.map(takeEvent));
	const kept = await shop.asOwner((tx) =>
		tx.sql.query.paymentEvent.findMany({ where: eq(paymentEvent.objectId, session) })
	);
	expect(kept).toHaveLength(2);
	for (const { id } of [...kept, ...kept]) {
		await handlePaymentEvent({ operatorId: shop.operatorId, paymentEventId: id });
	}
	expect((await readOrderRow(shop, orderId)).status).toBe('paid');
	expect(await ticketsOf(orderId)).toHaveLength(1);
});

test('an event that comes before the session’s name was stored finds its order', async () => {
	const orderId = await hold(shop, freshSlot().id);
	const session = await payAtService(shop, orderId);
	await shop.asOwner((tx) =>
		tx.sql.execute(
			`update "order" set checkout_session_id = null, checkout_url = null where id = '${orderId}'`
		)
	);
	const eventId = `evt_early_${orderId}`;
	await takeEvent({
		eventId,
		type: 'checkout.session.completed',
		accountId: shop.accountId,
		objectId: session
	});
	const [kept] = await shop.asOwner((tx) =>
		tx.sql.query.paymentEvent.findMany({ where: eq(paymentEvent.eventId, eventId) })
	);
	await handlePaymentEvent({ operatorId: shop.operatorId, paymentEventId: kept!.id });
	expect((await readOrderRow(shop, orderId)).status).toBe('paid');
});

test('the service’s answer lost after it did the work: one session, one charge', async () => {
	const orderId = await hold(shop, freshSlot().id);
	await layFaults({ match: 'POST /v1/checkout/sessions', fault: 'drop-after-commit', times: 2 });
	const first = await openCheckoutOf(shop, orderId);
	const second = await openCheckoutOf(shop, orderId);
	expect(second).toBe(first);
	const { sessions } = await atService(shop);
	expect(sessions.filter((one) => one.client_reference_id === orderId)).toHaveLength(1);
});

describe('a hold that lapses', () => {
	test('is ended by a job at that very instant', async () => {
		const orderId = await hold(shop, freshSlot().id);
		const job = await jobWithKey(`hold-${orderId}`);
		expect(job?.runAt).toEqual((await readOrderRow(shop, orderId)).holdUntil);
	});

	test('gives its places back, and its session can no longer be paid', async () => {
		const { id } = freshSlot();
		const orderId = await hold(shop, id, { adults: 5 });
		const session = await openCheckoutOf(shop, orderId);
		await lapse(orderId);
		await settleOrder(shop.operatorId, orderId, 'hold_end');
		expect(await readOrderRow(shop, orderId)).toMatchObject({
			status: 'expired',
			closedReason: 'hold_lapsed'
		});
		expect(await readSlotRow(shop, id)).toMatchObject({ held: 0, sold: 0 });
		const there = (await atService(shop)).sessions.find((one) => one.id === session);
		expect(there?.status).toBe('expired');
	});

	test('gives its places to the next buyer even while no worker runs', async () => {
		const { id, capacity } = freshSlot();
		const lapsed = await hold(shop, id, { adults: capacity });
		await lapse(lapsed);
		const orderId = await hold(shop, id, { adults: capacity });
		expect((await readOrderRow(shop, orderId)).status).toBe('pending');
		expect((await readOrderRow(shop, lapsed)).status).toBe('expired');
	});

	test('and is paid after all takes places when there are any', async () => {
		const orderId = await hold(shop, freshSlot().id, { adults: 2 });
		await payAtService(shop, orderId);
		await shop.asOwner((tx) =>
			tx.sql.execute(
				`update "order" set status = 'expired', closed_at = now(), closed_reason = 'hold_lapsed' where id = '${orderId}'`
			)
		);
		await settleOrder(shop.operatorId, orderId, 'event');
		expect(await readOrderRow(shop, orderId)).toMatchObject({ status: 'paid', closedReason: null });
		expect(await ticketsOf(orderId)).toHaveLength(2);
	});

	test('and is paid after the places went to others gets its money back and is told', async () => {
		const { id, capacity } = freshSlot();
		const email = newAddress();
		const late = await hold(shop, id, { adults: 4, email });
		await payAtService(shop, late);
		await lapse(late);
		await buy(shop, id, { adults: capacity });
		await settleOrder(shop.operatorId, late, 'event');
		expect(await readOrderRow(shop, late)).toMatchObject({
			status: 'cancelled',
			closedReason: 'no_places'
		});
		expect(await ticketsOf(late)).toEqual([]);
		await sendRefunds(late);
		expect(await refundsOf(late)).toMatchObject([{ status: 'done', amountMinor: 6400 }]);
		expect((await lettersTo(email)).map(({ kind }) => kind)).toEqual(['money_back']);
		expect(await readSlotRow(shop, id)).toMatchObject({ sold: capacity, held: 0 });
	});

	test('and is paid after its slot was called off gets its money back', async () => {
		const { id } = freshSlot();
		const orderId = await hold(shop, id);
		await payAtService(shop, orderId);
		await shop.asOwner((tx) =>
			tx.sql.update(slot).set({ status: 'called_off' }).where(eq(slot.id, id))
		);
		await settleOrder(shop.operatorId, orderId, 'return');
		expect(await readOrderRow(shop, orderId)).toMatchObject({
			status: 'cancelled',
			closedReason: 'called_off'
		});
		expect(await refundsOf(orderId)).toMatchObject([{ status: 'asked', amountMinor: 1600 }]);
	});
});

describe('refunds', () => {
	test('whose answer is lost after the work are sent once', async () => {
		const { id, capacity } = freshSlot();
		const late = await hold(shop, id);
		await payAtService(shop, late);
		await lapse(late);
		await buy(shop, id, { adults: capacity });
		await settleOrder(shop.operatorId, late, 'event');
		const [asked] = await refundsOf(late);
		// More often than the client itself tries again: the job fails and comes back.
		await layFaults({ match: 'POST /v1/refunds', fault: 'drop-after-commit', times: 10 });
		const job = { operatorId: shop.operatorId, refundId: asked!.id };
		await expect(sendAskedRefund(job, { number: 1, of: 25 })).rejects.toThrow();
		await clearFaults();
		await sendAskedRefund(job, { number: 2, of: 25 });
		await sendAskedRefund(job, { number: 3, of: 25 });
		expect(await refundsOf(late)).toMatchObject([{ status: 'done' }]);
		const { refunds } = await atService(shop);
		expect(refunds.filter(({ metadata }) => metadata.orderId === late)).toHaveLength(1);
	});

	test('never come to more than was paid, whatever the code asks', async () => {
		const orderId = await buy(shop, freshSlot().id);
		const [paid] = await paymentsOf(orderId);
		const ask = (amountMinor: number) =>
			shop.asOwner((tx) =>
				tx.sql.insert(refund).values({
					operatorId: shop.operatorId,
					orderId,
					paymentId: paid!.id,
					amountMinor,
					currency: 'EUR',
					reason: 'box_office'
				})
			);
		const done = await Promise.allSettled([ask(1000), ask(1000), ask(1000)]);
		expect(done.filter(({ status }) => status === 'fulfilled')).toHaveLength(1);
		await ask(600);
		await expect(ask(1)).rejects.toMatchObject({ cause: { constraint: 'refund_within_payment' } });
	});
});
