import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import { sendSignal } from '../../../docker-free-dev/lib/processes.ts';
import { ledgerEntry, order, ticket } from '../../../src/lib/server/db/schema/index.ts';
import { askDouble } from '../../../src/lib/server/demo/orders.ts';
import { readBalance } from '../../../src/lib/server/payments/gateway/index.ts';
import { ledgerBalance, syncLedger } from '../../../src/lib/server/payments/ledger.ts';
import { failedRefunds, retryRefund } from '../../../src/lib/server/payments/refunds.ts';
import {
	callOff,
	callOffProgress,
	weighCallOff
} from '../../../src/lib/server/weather/call-off.ts';
import { lettersTo } from '../../support/letters.ts';
import { newAddress } from '../../support/people.ts';
import { startTestWorker, type TestProcess } from '../../support/processes.ts';
import { emptyQueue } from '../../support/queue.ts';
import { refusalOf } from '../../support/refusals.ts';
import {
	atService,
	buy,
	clearFaults,
	hold,
	layFaults,
	openCheckoutOf,
	openShop,
	readOrderRow,
	type Shop
} from '../../support/shop.ts';
import { until } from '../../support/until.ts';

let shop: Shop;
let worker: TestProcess | undefined;
beforeAll(async () => {
	shop = await openShop();
});
beforeEach(async () => {
	await emptyQueue();
	await clearFaults();
});
afterAll(async () => {
	await clearFaults();
	await worker?.stop();
});

const reason = 'Gusts above the limit of the masts.';
const callOffSlots = (slotIds: string[]) =>
	shop.asOwner((tx) => callOff(tx, { slotIds, reason }, new Date()));
const progress = (slotIds: string[]) => shop.asOwner((tx) => callOffProgress(tx, slotIds));
const allDone = (slotIds: string[]) => async () => {
	const rows = await progress(slotIds);
	return rows.every(({ state }) => state === 'done') ? rows : null;
};

test('a called-off slot leaves nobody unpaid, though the worker is killed in the middle', async () => {
	const [first, second] = [shop.slots[0]!, shop.slots[1]!];
	const emails = Array.from({ length: 9 }, newAddress);
	const paid: string[] = [];
	for (const [i, email] of emails.entries()) {
		paid.push(await buy(shop, (i % 2 ? first : second).id, { adults: 1, children: i % 2, email }));
	}
	const pending = await hold(shop, first.id, { adults: 1 });
	const session = await openCheckoutOf(shop, pending);

	const slotIds = [first.id, second.id];
	const weighed = await shop.asOwner((tx) => weighCallOff(tx, slotIds));
	expect(weighed).toMatchObject({ orders: 9, amountMinor: 9 * 1600 + 4 * 650 });

	await emptyQueue();
	// Refunds take their time, and one answer is lost: the kill falls among them.
	await layFaults(
		{ match: 'POST /v1/refunds', fault: 'drop-after-commit', times: 1 },
		{ match: 'POST /v1/refunds', fault: 'delay', times: 20, ms: 150 }
	);
	await callOffSlots(slotIds);
	worker = await startTestWorker();
	await until('a first refund', async () => (await atService(shop)).refunds.length >= 2);
	const killed = worker.pid()!;
	expect(sendSignal(killed, 'SIGKILL')).toBe(true);
	await until('all refunds', allDone(slotIds), 60_000);

	expect(worker.pid()).not.toBe(killed);
	const { refunds, charges } = await atService(shop);
	expect(refunds).toHaveLength(9);
	expect(new Set(refunds.map(({ metadata }) => metadata.orderId)).size).toBe(9);
	for (const charge of charges) expect(charge.amount_refunded).toBe(charge.amount);
	for (const orderId of paid) {
		expect(await readOrderRow(shop, orderId)).toMatchObject({
			status: 'cancelled',
			closedReason: 'called_off'
		});
		const tickets = await shop.asOwner((tx) =>
			tx.sql.query.ticket.findMany({ where: eq(ticket.orderId, orderId) })
		);
		expect(tickets.every(({ status }) => status === 'void')).toBe(true);
	}
	for (const email of emails) {
		const kinds = (await lettersTo(email)).map(({ kind }) => kind);
		expect(kinds).toEqual(['tickets', 'called_off']);
	}
	// Who was just paying is let go, and can not pay any more.
	expect((await readOrderRow(shop, pending)).closedReason).toBe('called_off');
	await until('the session’s end', async () =>
		(await atService(shop)).sessions.some(
			({ id, status }) => id === session && status === 'expired'
		)
	);

	// The ledger equals what the service says, to the cent.
	await syncLedger({ operatorId: shop.operatorId });
	expect(await shop.asOwner(ledgerBalance)).toEqual(await readBalance(shop.accountId));
	const entries = await shop.asOwner((tx) =>
		tx.sql.query.ledgerEntry.findMany({ where: eq(ledgerEntry.operatorId, shop.operatorId) })
	);
	expect(entries).toHaveLength(18);
	expect(entries.every(({ orderId }) => orderId !== null)).toBe(true);
	await syncLedger({ operatorId: shop.operatorId });
	expect(
		await shop.asOwner((tx) =>
			tx.sql.$count(ledgerEntry, eq(ledgerEntry.operatorId, shop.operatorId))
		)
	).toBe(18);
});

test('a refund that fails later is named, and can be tried again', async () => {
	const one = shop.slots[2]!;
	// This card takes the refund and gives it back afterwards.
	const orderId = await buy(shop, one.id, { card: '4000000000005126' });
	await callOffSlots([one.id]);
	worker ??= await startTestWorker();
	await until('the refund', allDone([one.id]));
	const [done] = await progress([one.id]);
	await askDouble('advance', {});
	const { providerRefundId } = done!.refund!;
	// As the webhook would bring it.
	const { takeEvent } = await import('../../../src/lib/server/payments/events.ts');
	await takeEvent({
		eventId: `evt_failed_${orderId}`,
		type: 'refund.failed',
		accountId: shop.accountId,
		objectId: providerRefundId!
	});
	const failed = await until('the failure', async () => {
		const [row] = await progress([one.id]);
		return row?.state === 'failed' ? row : null;
	});
	const listed = await shop.asOwner(failedRefunds);
	expect(listed).toMatchObject([{ orderId, amountMinor: 1600 }]);
	expect(listed[0]!.fault).toBeTruthy();
	await shop.asOwner((tx) => retryRefund(tx, failed.refund!.id));
	expect(await shop.asOwner(failedRefunds)).toEqual([]);
	const again = await refusalOf(shop.asOwner((tx) => retryRefund(tx, failed.refund!.id)));
	expect(again.kind).toBe('conflict');
});

test('a slot is called off once, and only by one who may', async () => {
	const one = shop.slots[3]!;
	const both = await Promise.allSettled([callOffSlots([one.id]), callOffSlots([one.id])]);
	expect(both.filter(({ status }) => status === 'fulfilled')).toHaveLength(1);
	const refusal = await refusalOf(
		shop.asVisitor((tx) => callOff(tx, { slotIds: [shop.slots[4]!.id], reason }, new Date()))
	);
	expect(refusal.kind).toBe('forbidden');
});

test('buying and calling off at the same moment: nobody is left with tickets and no slot', async () => {
	const one = shop.slots[5]!;
	const buying = Array.from({ length: 6 }, () => buy(shop, one.id));
	const calling = callOffSlots([one.id]);
	await Promise.allSettled([...buying, calling]);
	worker ??= await startTestWorker();
	await until('every order of the slot at rest', async () => {
		const orders = await shop.asOwner((tx) =>
			tx.sql.query.order.findMany({ where: eq(order.slotId, one.id) })
		);
		return orders.every(({ status }) => status === 'cancelled' || status === 'expired');
	});
	await until('the refunds', allDone([one.id]));
	const { charges, refunds } = await atService(shop);
	const orders = await shop.asOwner((tx) =>
		tx.sql.query.order.findMany({ where: eq(order.slotId, one.id) })
	);
	const backTo = new Map(refunds.map(({ metadata, amount }) => [metadata.orderId, amount]));
	for (const { id, checkoutSessionId } of orders) {
		if (checkoutSessionId && backTo.has(id)) expect(backTo.get(id)).toBe(1600);
	}
	const kept = charges.reduce((sum, charge) => sum + charge.amount - charge.amount_refunded, 0);
	// All that is kept is the refund that failed and is being tried again, if it has not been sent yet.
	expect(kept % 1600).toBe(0);
	expect(kept).toBeLessThanOrEqual(1600);
});
