import { and, eq, ne } from 'drizzle-orm';
import { beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { cancelPaidOrder } from '../../../src/lib/server/booking/cancel.ts';
import { cancelByVisitor } from '../../../src/lib/server/booking/orders.ts';
import { order, orderMove, ticket } from '../../../src/lib/server/db/schema/index.ts';
import { admit, gateSlots } from '../../../src/lib/server/gate/gate.ts';
import {
	callOff,
	callOffOrder,
	callOffProgress
} from '../../../src/lib/server/weather/call-off.ts';
import { adminQuery } from '../../support/database.ts';
import { lettersTo } from '../../support/letters.ts';
import { newAddress } from '../../support/people.ts';
import { expectSound, move, movesOf, refundsOf, ticketsOf } from '../../support/moves.ts';
import { emptyQueue } from '../../support/queue.ts';
import { refusalOf } from '../../support/refusals.ts';
import { buy, openShop, readOrderRow, type Shop } from '../../support/shop.ts';

let shop: Shop;
let next = 0;
/** A slot of its own for each test. */
const freshSlot = () => shop.slots[next++]!;

beforeAll(async () => {
	shop = await openShop();
});
beforeEach(emptyQueue);

const scan = (slotId: string, typed: string) =>
	shop.asOwner((tx) => admit(tx, { slotId, typed }, new Date()));

describe('at the gate', () => {
	test('the old ticket is told as moved, and to when; the new one lets in and counts once', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id);
		const [old] = await ticketsOf(shop, orderId);
		await move(shop, orderId, to.id);
		const fresh = (await ticketsOf(shop, orderId)).find(({ status }) => status === 'valid')!;
		for (const at of [from, to]) {
			expect(await scan(at.id, old!.code)).toMatchObject({
				answer: 'moved',
				startsAt: to.startsAt,
				localDate: to.localDate
			});
		}
		expect(await scan(from.id, fresh.code)).toMatchObject({
			answer: 'other_slot',
			startsAt: to.startsAt
		});
		expect(await scan(to.id, fresh.code)).toEqual({ answer: 'let_in', name: 'Adult' });
		const now = new Date(to.startsAt.getTime() - 60_000);
		const slots = await shop.asOwner((tx) => gateSlots(tx, now));
		expect(slots.find(({ id }) => id === to.id)).toMatchObject({ sold: 1, entered: 1 });
		await shop.asOwner((tx) =>
			cancelPaidOrder(tx, orderId, { reason: 'called_off', percent: 100 }, new Date())
		);
		expect((await scan(to.id, old!.code)).answer).toBe('void');
		const statuses = (await ticketsOf(shop, orderId)).map(({ status }) => status).sort();
		expect(statuses).toEqual(['moved', 'void']);
	});

	test('a ticket scanned and moved at the same moment is one or the other', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orders = await Promise.all(Array.from({ length: 6 }, () => buy(shop, from.id)));
		const codes = await Promise.all(orders.map(async (id) => (await ticketsOf(shop, id))[0]!.code));
		await Promise.allSettled(
			orders.map(async (id, i) => {
				const [scanned, moved] = await Promise.allSettled([
					scan(from.id, codes[i]!),
					move(shop, id, to.id)
				]);
				const letIn = scanned.status === 'fulfilled' && scanned.value.answer === 'let_in';
				expect(letIn).toBe(moved.status === 'rejected');
			})
		).then((all) => all.forEach((one) => expect(one.status).toBe('fulfilled')));
		await expectSound(shop);
	});
});

describe('the visitor’s money', () => {
	/** An hour before a slot: the policy of the shop gives nothing back any more. */
	const late = (one: { startsAt: Date }) => new Date(one.startsAt.getTime() - 3_600_000);

	test('goes back in full after the operator moved the visit, until the new slot begins', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id);
		await move(shop, orderId, to.id, { wishedBy: 'operator' });
		const begun = shop.asVisitor((tx) => cancelByVisitor(tx, orderId, to.startsAt));
		expect((await refusalOf(begun)).message).toContain('no longer be cancelled');
		await shop.asVisitor((tx) => cancelByVisitor(tx, orderId, late(to)));
		expect(await refundsOf(shop, orderId)).toMatchObject([
			{ amountMinor: 1600, reason: 'visitor' }
		]);
	});

	test('follows the policy when the visitor had asked for another time', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const email = newAddress();
		const orderId = await buy(shop, from.id, { email });
		await move(shop, orderId, to.id, { wishedBy: 'visitor' });
		expect((await lettersTo(email))[1]!.text).not.toContain('in full');
		await shop.asVisitor((tx) => cancelByVisitor(tx, orderId, late(to)));
		expect(await refundsOf(shop, orderId)).toEqual([]);
		expect((await readOrderRow(shop, orderId)).status).toBe('cancelled');
	});

	test('moving and cancelling at the same moment: by the old terms or by the new, never between', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const seen = new Set<string>();
		for (let i = 0; i < 8; i++) {
			const orderId = await buy(shop, from.id);
			const now = late(from);
			const go = [
				() => move(shop, orderId, to.id, { now }),
				() => shop.asVisitor((tx) => cancelByVisitor(tx, orderId, now))
			];
			if (i % 2) go.reverse();
			await Promise.allSettled(go.map((act) => act()));
			expect((await readOrderRow(shop, orderId)).status).toBe('cancelled');
			const moves = await movesOf(shop, orderId);
			const back = (await refundsOf(shop, orderId)).map(({ amountMinor }) => amountMinor);
			expect(back).toEqual(moves.length > 0 ? [1600] : []);
			seen.add(String(moves.length));
		}
		console.log(`ended with moves: ${[...seen].join(', ')}`);
		await expectSound(shop);
	});
});

describe('with a call-off of its slot', () => {
	const reason = 'Gusts above the limit of the masts.';
	const call = (slotIds: string[]) =>
		shop.asOwner((tx) => callOff(tx, { slotIds, reason }, new Date()));

	test('moved after the call and before its turn, it stays moved, and the list says so', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const [stays, goes] = [await buy(shop, from.id), await buy(shop, from.id)];
		const weatherCallId = await call([from.id]);
		const { createdAt } = (await shop.asOwner((tx) =>
			tx.sql.query.weatherCall.findFirst({
				where: (row, { eq: same }) => same(row.id, weatherCallId)
			})
		))!;
		await move(shop, goes, to.id);
		for (const orderId of [stays, goes, stays, goes]) {
			await callOffOrder({ operatorId: shop.operatorId, orderId, weatherCallId });
		}
		expect(await readOrderRow(shop, goes)).toMatchObject({ status: 'paid', slotId: to.id });
		expect(await refundsOf(shop, goes)).toEqual([]);
		expect(await readOrderRow(shop, stays)).toMatchObject({ status: 'cancelled' });
		expect(await refundsOf(shop, stays)).toMatchObject([{ amountMinor: 1600 }]);
		const told = await shop.asOwner((tx) => callOffProgress(tx, [from.id], createdAt));
		expect(told.map(({ orderId, state }) => [orderId, state]).sort()).toEqual(
			[
				[stays, 'refund_asked'],
				[goes, 'moved']
			].sort()
		);
		await expectSound(shop);
	});

	test('once called off and paid back it can not be moved any more', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id);
		const weatherCallId = await call([from.id]);
		await callOffOrder({ operatorId: shop.operatorId, orderId, weatherCallId });
		expect((await refusalOf(move(shop, orderId, to.id))).message).toContain('cancelled');
	});

	test('moving in while the slot is called off: refused, or paid back like the others', async () => {
		for (let i = 0; i < 4; i++) {
			const [from, to] = [freshSlot(), freshSlot()];
			const orderId = await buy(shop, from.id);
			const [moved, called] = await Promise.allSettled([move(shop, orderId, to.id), call([to.id])]);
			if (called.status === 'rejected') throw called.reason;
			const jobs = await adminQuery<{ payload: { orderId?: string } }>(
				`select payload from graphile_worker._private_jobs j
				join graphile_worker._private_tasks t on t.id = j.task_id where t.identifier = 'call_off_order'`
			);
			const listed = jobs.some(({ payload }) => payload.orderId === orderId);
			expect(listed).toBe(moved.status === 'fulfilled');
			if (moved.status === 'rejected') expect(moved.reason).toMatchObject({ kind: 'conflict' });
			await emptyQueue();
		}
		await expectSound(shop);
	});
});

describe('the database', () => {
	test('lets no order change its slot without a move, nor a ticket', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id);
		const bare = shop.asOwner((tx) =>
			tx.sql.update(order).set({ slotId: to.id }).where(eq(order.id, orderId))
		);
		await expect(bare).rejects.toMatchObject({ constraint: 'order_move_recorded' });
		await move(shop, orderId, to.id);
		await move(shop, orderId, from.id);
		// That it once went there is no record of going again.
		const again = shop.asOwner((tx) =>
			tx.sql.update(order).set({ slotId: to.id }).where(eq(order.id, orderId))
		);
		await expect(again).rejects.toMatchObject({ constraint: 'order_move_recorded' });
		const ticketAlone = shop.asOwner((tx) =>
			tx.sql.update(ticket).set({ slotId: to.id }).where(eq(ticket.orderId, orderId))
		);
		await expect(ticketAlone).rejects.toMatchObject({ cause: { code: '42501' } });
		const movedAlone = shop.asOwner((tx) =>
			tx.sql.update(ticket).set({ status: 'moved' }).where(eq(ticket.orderId, orderId))
		);
		await expect(movedAlone).rejects.toMatchObject({ constraint: 'order_paid_has_tickets' });
		await move(shop, orderId, to.id);
		const valid = shop.asOwner((tx) =>
			tx.sql
				.update(ticket)
				.set({ status: 'valid' })
				.where(and(eq(ticket.orderId, orderId), ne(ticket.slotId, to.id)))
		);
		await expect(valid).rejects.toMatchObject({ cause: { constraint: 'ticket_keep_moved' } });
		const rewritten = shop.asOwner((tx) =>
			tx.sql.update(orderMove).set({ wishedBy: 'visitor' }).where(eq(orderMove.orderId, orderId))
		);
		await expect(rewritten).rejects.toMatchObject({ cause: { code: '42501' } });
		await expectSound(shop);
	});
});
