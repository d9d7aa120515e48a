import type Stripe from 'stripe';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { errorOf, order, startWorld, type World } from './payment-helpers.ts';

let world: World;
beforeAll(async () => {
	world = await startWorld();
});
afterAll(() => world.stop());

/** Pays an order on an account; answers the intent's id. */
async function paid(
	account: string,
	amount: number,
	card = '4242424242424242',
	fee?: number
): Promise<string> {
	const session = await world.stripe.checkout.sessions.create(
		order(
			amount,
			fee === undefined ? {} : { payment_intent_data: { application_fee_amount: fee } }
		),
		{ stripeAccount: account }
	);
	const { body } = await world.helper('POST', `checkout/${session.id}/pay`, { card });
	return String(body.payment_intent);
}

/** The account's balance and the sum of its movements: they must be one. */
async function balance(account?: string): Promise<number> {
	const on = account ? { stripeAccount: account } : {};
	const movements: Stripe.BalanceTransaction[] = [];
	for await (const one of world.stripe.balanceTransactions.list({ limit: 100 }, on)) {
		movements.push(one);
	}
	for (const one of movements) expect(one.net).toBe(one.amount - one.fee);
	for (const one of movements) {
		expect(one.fee_details.reduce((sum, detail) => sum + detail.amount, 0)).toBe(one.fee);
	}
	const shown = await world.stripe.balance.retrieve({}, on);
	const [available] = shown.available;
	expect(available?.amount).toBe(movements.reduce((sum, one) => sum + one.net, 0));
	return available?.amount ?? 0;
}

test('money stays on the operator’s account; the platform gets its fee alone', async () => {
	const account = await world.account();
	const platformBefore = await balance();
	const intent = await paid(account, 10_000, '4242424242424242', 500);
	// 1.5 % and 25 for the service, 500 for the platform.
	expect(await balance(account)).toBe(10_000 - 175 - 500);
	expect((await balance()) - platformBefore).toBe(500);
	const other = await world.account();
	expect(await balance(other)).toBe(0);
	const elsewhere = await errorOf(
		world.stripe.paymentIntents.retrieve(intent, {}, { stripeAccount: other })
	);
	expect(elsewhere).toMatchObject({ statusCode: 404, code: 'resource_missing' });
	expect(await errorOf(world.stripe.paymentIntents.retrieve(intent))).toMatchObject({
		code: 'resource_missing'
	});
	const [fee] = (await world.stripe.applicationFees.list({ limit: 1 })).data;
	expect(fee).toMatchObject({ amount: 500, account, refunded: false });
});

test('refunds in parts give the platform’s fee back in proportion, to the cent', async () => {
	const account = await world.account();
	const on = { stripeAccount: account };
	const platformBefore = await balance();
	const intent = await paid(account, 1_000, '4242424242424242', 101);
	const afterPaying = await balance(account);
	for (const amount of [333, 333]) {
		const refund = await world.stripe.refunds.create(
			{ payment_intent: intent, amount, refund_application_fee: true },
			on
		);
		expect(refund).toMatchObject({ status: 'succeeded', amount });
	}
	const tooMuch = await errorOf(
		world.stripe.refunds.create({ payment_intent: intent, amount: 335 }, on)
	);
	expect(tooMuch).toMatchObject({ statusCode: 400, param: 'amount' });
	await world.stripe.refunds.create({ payment_intent: intent, refund_application_fee: true }, on);
	expect((await balance()) - platformBefore).toBe(0);
	expect((await balance(account)) - afterPaying).toBe(-1_000 + 101);
	const again = await errorOf(world.stripe.refunds.create({ payment_intent: intent }, on));
	expect(again).toMatchObject({ statusCode: 400, code: 'charge_already_refunded' });
	const read = await world.stripe.paymentIntents.retrieve(
		intent,
		{ expand: ['latest_charge.refunds'] },
		on
	);
	expect(read.latest_charge).toMatchObject({
		refunded: true,
		amount_refunded: 1_000,
		refunds: { data: [{ amount: 334 }, { amount: 333 }, { amount: 333 }] }
	});
	expect((await world.stripe.refunds.list({ payment_intent: intent }, on)).data).toHaveLength(3);
});

test('a refund that fails later puts the money back and tells so', async () => {
	const account = await world.account();
	const on = { stripeAccount: account };
	const intent = await paid(account, 2_000, '4000000000005126');
	const before = await balance(account);
	const refund = await world.stripe.refunds.create({ payment_intent: intent }, on);
	expect(refund.status).toBe('succeeded');
	expect(await balance(account)).toBe(before - 2_000);
	await world.helper('POST', 'advance', {});
	await world.shop.until((events) => events.some((e) => e.type === 'refund.failed'));
	const failed = await world.stripe.refunds.retrieve(refund.id, {}, on);
	expect(failed).toMatchObject({ status: 'failed', failure_reason: 'expired_or_canceled_card' });
	expect(await balance(account)).toBe(before);
	const told = world.shop.received.find(({ event }) => event.type === 'refund.failed');
	expect(told?.event.account).toBe(account);
});

test('a refund that takes a while is pending first and succeeds then', async () => {
	const account = await world.account();
	const intent = await paid(account, 2_000, '4000000000007726');
	const on = { stripeAccount: account };
	const refund = await world.stripe.refunds.create({ payment_intent: intent }, on);
	expect(refund.status).toBe('pending');
	await world.helper('POST', 'advance', {});
	expect((await world.stripe.refunds.retrieve(refund.id, {}, on)).status).toBe('succeeded');
});

test('a disputed charge takes money and a fee; a won dispute gives the money back', async () => {
	const account = await world.account();
	const on = { stripeAccount: account };
	const intent = await paid(account, 5_000, '4000000000000259');
	const before = await balance(account);
	await world.helper('POST', 'advance', {});
	await world.shop.until((events) => events.some((e) => e.type === 'charge.dispute.created'));
	expect(await balance(account)).toBe(before - 5_000 - 1_500);
	expect(await errorOf(world.stripe.refunds.create({ payment_intent: intent }, on))).toMatchObject({
		code: 'charge_disputed'
	});
	const [dispute] = (await world.stripe.disputes.list({ payment_intent: intent }, on)).data;
	await world.helper('POST', `disputes/${dispute?.id}/close`, { status: 'won' });
	expect(await balance(account)).toBe(before - 1_500);
});

test('a platform’s fee needs an account to take it from and is not more than the amount', async () => {
	const withFee = order(1_000, { payment_intent_data: { application_fee_amount: 1_001 } });
	const account = await world.account();
	expect(
		await errorOf(world.stripe.checkout.sessions.create(withFee, { stripeAccount: account }))
	).toMatchObject({ statusCode: 400, param: 'payment_intent_data[application_fee_amount]' });
	expect(await errorOf(world.stripe.checkout.sessions.create(withFee))).toMatchObject({
		statusCode: 400
	});
});

test('an account is completed on its page and then takes money; a restricted one does not', async () => {
	const account = await world.stripe.accounts.create({ type: 'express', country: 'GB' });
	expect(account).toMatchObject({ charges_enabled: false, default_currency: 'gbp' });
	const link = await world.stripe.accountLinks.create({
		account: account.id,
		type: 'account_onboarding',
		return_url: 'http://127.0.0.1:9/return',
		refresh_url: 'http://127.0.0.1:9/refresh'
	});
	const complete = () => fetch(link.url, { method: 'POST', redirect: 'manual' });
	expect((await complete()).headers.get('location')).toBe('http://127.0.0.1:9/return');
	expect((await complete()).headers.get('location')).toBe('http://127.0.0.1:9/refresh');
	expect(await world.stripe.accounts.retrieve(account.id)).toMatchObject({
		charges_enabled: true,
		details_submitted: true,
		capabilities: { card_payments: 'active' }
	});
	await world.shop.until((events) =>
		events.some((e) => e.type === 'account.updated' && e.account === account.id)
	);
	await world.helper('POST', `accounts/${account.id}/restrict`);
	expect(
		await errorOf(
			world.stripe.checkout.sessions.create(order(1_000), { stripeAccount: account.id })
		)
	).toMatchObject({ statusCode: 400 });
});

test('an intent of its own is confirmed with a test payment method', async () => {
	const account = await world.account();
	const on = { stripeAccount: account };
	const intent = await world.stripe.paymentIntents.create({ amount: 700, currency: 'eur' }, on);
	const declined = await errorOf(
		world.stripe.paymentIntents.confirm(intent.id, { payment_method: 'pm_card_chargeDeclined' }, on)
	);
	expect(declined).toMatchObject({ statusCode: 402, type: 'StripeCardError' });
	const done = await world.stripe.paymentIntents.confirm(
		intent.id,
		{ payment_method: 'pm_card_visa' },
		on
	);
	expect(done.status).toBe('succeeded');
	expect(await errorOf(world.stripe.paymentIntents.cancel(intent.id, {}, on))).toMatchObject({
		code: 'payment_intent_unexpected_state'
	});
});
