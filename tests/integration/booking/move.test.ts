import { and, eq, ne } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { cancelPaidOrder } from '../../../src/lib/server/booking/cancel.ts';
import { orderCalendar } from '../../../src/lib/server/booking/enclosures.ts';
import { listMoveTargets, moveOrder } from '../../../src/lib/server/booking/move.ts';
import { cancelByVisitor } from '../../../src/lib/server/booking/orders.ts';
import {
	order,
	orderMove,
	refund,
	slot,
	ticket,
	trail
} from '../../../src/lib/server/db/schema/index.ts';
import { roles, type Role } from '../../../src/lib/server/db/schema/operators.ts';
import { admit, gateSlots } from '../../../src/lib/server/gate/gate.ts';
import { drawUp } from '../../../src/lib/server/mail/enclosures.ts';
import {
	callOff,
	callOffOrder,
	callOffProgress
} from '../../../src/lib/server/weather/call-off.ts';
import { adminQuery } from '../../support/database.ts';
import { lettersTo } from '../../support/letters.ts';
import { asMember, makeMember, newAddress } from '../../support/people.ts';
import { emptyQueue } from '../../support/queue.ts';
import { createRandom, seedFor } from '../../support/random.ts';
import { refusalOf } from '../../support/refusals.ts';
import {
	buy,
	hold,
	lapse,
	openShop,
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
beforeEach(emptyQueue);

interface Wish {
	wishedBy?: 'visitor' | 'operator';
	words?: string;
	moveId?: string;
	now?: Date;
}
const move = (
	orderId: string,
	slotId: string,
	{ wishedBy = 'operator', words = '', moveId = uuidv7(), now = new Date() }: Wish = {}
) => shop.asOwner((tx) => moveOrder(tx, orderId, slotId, { moveId, wishedBy, words }, now));
const ticketsOf = (orderId: string) =>
	shop.asOwner((tx) => tx.sql.query.ticket.findMany({ where: eq(ticket.orderId, orderId) }));
const movesOf = (orderId: string) =>
	shop.asOwner((tx) => tx.sql.query.orderMove.findMany({ where: eq(orderMove.orderId, orderId) }));
const refundsOf = (orderId: string) =>
	shop.asOwner((tx) => tx.sql.query.refund.findMany({ where: eq(refund.orderId, orderId) }));
const setStatus = (slotId: string, status: 'open' | 'paused' | 'called_off') =>
	shop.asOwner((tx) => tx.sql.update(slot).set({ status }).where(eq(slot.id, slotId)));
const scan = (slotId: string, typed: string) =>
	shop.asOwner((tx) => admit(tx, { slotId, typed }, new Date()));

/** Every slot's counters are what its orders say, and every paid order has its tickets there. */
async function expectSound(): Promise<void> {
	const wrong = await adminQuery(
		`select s.id from slot s where s.operator_id = $1 and (s.sold, s.held) is distinct from (
			(select coalesce(sum(places), 0) from "order" o where o.slot_id = s.id and o.status = 'paid'),
			(select coalesce(sum(places), 0) from "order" o where o.slot_id = s.id and o.status = 'pending'))
		union all select o.id from "order" o where o.operator_id = $1 and o.status = 'paid' and o.places <> (
			select count(*) from ticket t where t.order_id = o.id and t.slot_id = o.slot_id and t.status in ('valid', 'used'))
		union all select o.id from "order" o where o.operator_id = $1 and exists (
			select 1 from ticket t where t.order_id = o.id and t.slot_id <> o.slot_id and t.status in ('valid', 'used'))`,
		[shop.operatorId]
	);
	expect(wrong).toEqual([]);
}

test('a moved order has its places, tickets and letter in the new slot, and no money moves', async () => {
	const [from, to] = [freshSlot(), freshSlot()];
	const email = newAddress();
	const orderId = await buy(shop, from.id, { adults: 2, children: 1, email });
	const before = await ticketsOf(orderId);
	const words = 'The west mast is being mended that day.';
	expect(await move(orderId, to.id, { words })).toBe(true);

	const row = await readOrderRow(shop, orderId);
	expect(row).toMatchObject({ slotId: to.id, status: 'paid', totalMinor: 3850 });
	expect(await readSlotRow(shop, from.id)).toMatchObject({ sold: 0, held: 0, status: 'open' });
	expect(await readSlotRow(shop, to.id)).toMatchObject({ sold: 3, held: 0 });
	const tickets = await ticketsOf(orderId);
	expect(
		tickets
			.filter(({ status }) => status === 'moved')
			.map(({ id }) => id)
			.sort()
	).toEqual(before.map(({ id }) => id).sort());
	const fresh = tickets.filter(({ status }) => status === 'valid');
	expect(fresh).toHaveLength(3);
	expect(fresh.every(({ slotId }) => slotId === to.id)).toBe(true);

	const letters = await lettersTo(email);
	expect(letters.map(({ kind }) => kind)).toEqual(['tickets', 'moved']);
	const told = letters[1]!.text;
	for (const { code } of fresh) expect(told.replaceAll('-', '')).toContain(code);
	for (const { code } of before) expect(told.replaceAll('-', '')).not.toContain(code);
	expect(told).toContain(words);
	expect(told).toContain('38.50 EUR goes back in full');
	expect(await refundsOf(orderId)).toEqual([]);
	const documents = await adminQuery('select kind from document where order_id = $1', [orderId]);
	expect(documents).toEqual([{ kind: 'receipt' }]);
	const [entry] = await shop.asOwner((tx) =>
		tx.sql.query.trail.findMany({
			where: and(eq(trail.subjectId, orderId), eq(trail.action, 'order.moved'))
		})
	);
	expect(entry).toMatchObject({
		actorName: shop.owner.name,
		before: { slotId: from.id },
		after: { slotId: to.id, wishedBy: 'operator', words }
	});
	await expectSound();
});

test('the letters carry the pictures of their own codes, and the calendar entry follows the move', async () => {
	const [from, to] = [freshSlot(), freshSlot()];
	const email = newAddress();
	const orderId = await buy(shop, from.id, { email });
	const calendar = () => shop.asOwner((tx) => orderCalendar(tx, orderId));
	const field = (text: string | null, name: string) =>
		new RegExp(`^${name}:(.*)$`, 'm').exec(text ?? '')?.[1]?.trim();
	const first = await calendar();
	await move(orderId, to.id);
	const second = await calendar();
	expect(field(second, 'UID')).toBe(field(first, 'UID'));
	expect([field(first, 'SEQUENCE'), field(second, 'SEQUENCE')]).toEqual(['0', '1']);
	expect(field(second, 'DTSTART')).toBe(to.startsAt.toISOString().replaceAll(/[-:]|\.000/g, ''));
	await shop.asOwner((tx) =>
		cancelPaidOrder(tx, orderId, { reason: 'visitor', percent: 100 }, new Date())
	);
	expect(field(await calendar(), 'SEQUENCE')).toBe('2');
	const rows = await adminQuery<{ enclosures: Parameters<typeof drawUp>[1]; body_html: string }>(
		`select enclosures, body_html from letter where to_address = $1 and kind in ('tickets', 'moved') order by id`,
		[email]
	);
	for (const { enclosures, body_html: html } of rows) {
		const parts = await shop.asOwner((tx) => drawUp(tx, enclosures));
		const pictures = parts.flatMap(({ cid }) => cid ?? []);
		expect(pictures).toHaveLength(1);
		expect(html).toContain(`cid:${pictures[0]}`);
	}
});

test('the same form sent many times at once is one move, one letter', async () => {
	const [from, to] = [freshSlot(), freshSlot()];
	const email = newAddress();
	const orderId = await buy(shop, from.id, { email });
	const moveId = uuidv7();
	const done = await Promise.all(Array.from({ length: 6 }, () => move(orderId, to.id, { moveId })));
	expect(done.filter(Boolean)).toHaveLength(1);
	// An old page, sent again after the order has gone back: it does not go a second time.
	await move(orderId, from.id);
	expect(await move(orderId, to.id, { moveId })).toBe(false);
	expect((await readOrderRow(shop, orderId)).slotId).toBe(from.id);
	expect(await movesOf(orderId)).toHaveLength(2);
	expect((await lettersTo(email)).map(({ kind }) => kind)).toEqual(['tickets', 'moved', 'moved']);
	const other = await buy(shop, from.id);
	expect((await refusalOf(move(other, to.id, { moveId }))).message).toContain('another order');
	await expectSound();
});

test('moves and buyers at once for the last places: never one too many, nobody loses a place', async () => {
	const random = createRandom(seedFor('moves and sales', 20261201));
	const target = freshSlot();
	const sources = [freshSlot(), freshSlot(), freshSlot()];
	const orders: { id: string; places: number; from: string }[] = [];
	for (let i = 0; i < 9; i++) {
		const places = 1 + Math.floor(random() * 3);
		const from = sources[i % 3]!.id;
		orders.push({ id: await buy(shop, from, { adults: places }), places, from });
	}
	const lapsed = await hold(shop, target.id, { adults: 4 });
	await lapse(lapsed);
	const moves = orders.map(({ id }) => move(id, target.id));
	const buyers = Array.from({ length: 9 }, () =>
		hold(shop, target.id, { adults: 1 + Math.floor(random() * 2) })
	);
	const [moved] = await Promise.all([Promise.allSettled(moves), Promise.allSettled(buyers)]);
	for (const [i, one] of moved.entries()) {
		const { slotId, status } = await readOrderRow(shop, orders[i]!.id);
		expect(status).toBe('paid');
		expect(slotId).toBe(one.status === 'fulfilled' ? target.id : orders[i]!.from);
		if (one.status === 'rejected') {
			expect(one.reason).toMatchObject({ kind: 'conflict', field: 'slotId' });
		}
	}
	const row = await readSlotRow(shop, target.id);
	expect(row.sold + row.held).toBeLessThanOrEqual(row.capacity);
	// Whoever wanted one place was turned away only when there was none.
	expect(row.capacity - row.sold - row.held).toBeLessThan(3);
	expect((await readOrderRow(shop, lapsed)).status).toBe('expired');
	await expectSound();
});

test('orders that change places with one another do not wait for each other for ever', async () => {
	const [a, b] = [freshSlot(), freshSlot()];
	const there = await Promise.all(Array.from({ length: 4 }, () => buy(shop, a.id)));
	const back = await Promise.all(Array.from({ length: 4 }, () => buy(shop, b.id)));
	await Promise.all([
		...there.map((id) => move(id, b.id)),
		...back.map((id) => move(id, a.id)),
		hold(shop, a.id),
		hold(shop, b.id)
	]);
	expect(await readSlotRow(shop, a.id)).toMatchObject({ sold: 4, held: 1 });
	expect(await readSlotRow(shop, b.id)).toMatchObject({ sold: 4, held: 1 });
	await expectSound();
});

describe('not moved', () => {
	const nothingChanged = async (orderId: string, slotId: string) => {
		expect((await readOrderRow(shop, orderId)).slotId).toBe(slotId);
		expect((await ticketsOf(orderId)).some(({ status }) => status === 'moved')).toBe(false);
		expect(await movesOf(orderId)).toEqual([]);
	};

	test('is an order with a used ticket', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id, { adults: 2 });
		const [first] = await ticketsOf(orderId);
		await scan(from.id, first!.code);
		expect((await refusalOf(move(orderId, to.id))).message).toContain('has been used');
		await nothingChanged(orderId, from.id);
	});

	test('is an order that is pending, cancelled or expired', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const pending = await hold(shop, from.id);
		expect((await refusalOf(move(pending, to.id))).message).toContain('not paid yet');
		await lapse(pending);
		await shop.asOwner((tx) =>
			tx.sql
				.update(order)
				.set({ status: 'expired', closedAt: new Date(), closedReason: 'hold_lapsed' })
				.where(eq(order.id, pending))
		);
		expect((await refusalOf(move(pending, to.id))).kind).toBe('conflict');
		const cancelled = await buy(shop, from.id);
		await shop.asVisitor((tx) => cancelByVisitor(tx, cancelled, new Date()));
		expect((await refusalOf(move(cancelled, to.id))).message).toContain('cancelled');
		await nothingChanged(cancelled, from.id);
	});

	test('is any order to a slot that is full, paused, called off, begun, its own or not there', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id, { adults: 2 });
		await buy(shop, to.id, { adults: to.capacity - 1 });
		expect((await refusalOf(move(orderId, to.id))).message).toContain('too few places');
		const begun = new Date(to.startsAt.getTime());
		expect((await refusalOf(move(orderId, to.id, { now: begun }))).message).toContain('begun');
		await setStatus(to.id, 'paused');
		expect((await refusalOf(move(orderId, to.id))).message).toContain('paused');
		await setStatus(to.id, 'called_off');
		expect((await refusalOf(move(orderId, to.id))).message).toContain('called off');
		expect((await refusalOf(move(orderId, from.id))).message).toContain('already');
		expect((await refusalOf(move(orderId, uuidv7()))).kind).toBe('not_found');
		await nothingChanged(orderId, from.id);
		await expectSound();
	});

	test('is an order of another operator, nor to a slot of one: both are unknown here', async () => {
		const other = await openShop();
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id);
		const theirs = await buy(other, other.slots[0]!.id);
		const toTheirs = await refusalOf(move(orderId, other.slots[1]!.id));
		const toNothing = await refusalOf(move(orderId, uuidv7()));
		expect([toTheirs.kind, toTheirs.message]).toEqual([toNothing.kind, toNothing.message]);
		const ofTheirs = await refusalOf(move(theirs, to.id));
		const ofNothing = await refusalOf(move(uuidv7(), to.id));
		expect([ofTheirs.kind, ofTheirs.message]).toEqual([ofNothing.kind, ofNothing.message]);
		expect((await readOrderRow(other, theirs)).slotId).toBe(other.slots[0]!.id);
	});

	test('is any order by a role without the right', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id);
		const wish = { wishedBy: 'visitor', words: '' } as const;
		const go = (role: Role) => async () => {
			const person = role === 'owner' ? shop.owner : await makeMember(shop, role);
			return asMember(shop, person, role, (tx) =>
				moveOrder(tx, orderId, to.id, { ...wish, moveId: uuidv7() }, new Date())
			);
		};
		for (const role of roles.filter((one) => one !== 'owner' && one !== 'box_office')) {
			expect((await refusalOf(go(role)())).kind, role).toBe('forbidden');
		}
		const visitor = shop.asVisitor((tx) =>
			moveOrder(tx, orderId, to.id, { ...wish, moveId: uuidv7() }, new Date())
		);
		expect((await refusalOf(visitor)).kind).toBe('forbidden');
		await nothingChanged(orderId, from.id);
		expect(await go('box_office')()).toBe(true);
	});
});

test('only slots with room for the whole order are offered', async () => {
	const [from, small, big] = [freshSlot(), freshSlot(), freshSlot()];
	await buy(shop, small.id, { adults: small.capacity - 2 });
	const offered = await shop.asOwner((tx) =>
		listMoveTargets(tx, { siteId: shop.site.siteId, besides: from.id, places: 3 }, new Date())
	);
	const ids = offered.map(({ id }) => id);
	expect(ids).toContain(big.id);
	expect(ids).not.toContain(small.id);
	expect(ids).not.toContain(from.id);
	expect(offered.every(({ placesLeft }) => placesLeft >= 3)).toBe(true);
});

describe('at the gate', () => {
	test('the old ticket is told as moved, and to when; the new one lets in and counts once', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id);
		const [old] = await ticketsOf(orderId);
		await move(orderId, to.id);
		const fresh = (await ticketsOf(orderId)).find(({ status }) => status === 'valid')!;
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
		const statuses = (await ticketsOf(orderId)).map(({ status }) => status).sort();
		expect(statuses).toEqual(['moved', 'void']);
	});

	test('a ticket scanned and moved at the same moment is one or the other', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orders = await Promise.all(Array.from({ length: 6 }, () => buy(shop, from.id)));
		const codes = await Promise.all(orders.map(async (id) => (await ticketsOf(id))[0]!.code));
		await Promise.allSettled(
			orders.map(async (id, i) => {
				const [scanned, moved] = await Promise.allSettled([
					scan(from.id, codes[i]!),
					move(id, to.id)
				]);
				const letIn = scanned.status === 'fulfilled' && scanned.value.answer === 'let_in';
				expect(letIn).toBe(moved.status === 'rejected');
			})
		).then((all) => all.forEach((one) => expect(one.status).toBe('fulfilled')));
		await expectSound();
	});
});

describe('the visitor’s money', () => {
	/** An hour before a slot: the policy of the shop gives nothing back any more. */
	const late = (one: { startsAt: Date }) => new Date(one.startsAt.getTime() - 3_600_000);

	test('goes back in full after the operator moved the visit, until the new slot begins', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id);
		await move(orderId, to.id, { wishedBy: 'operator' });
		const begun = shop.asVisitor((tx) => cancelByVisitor(tx, orderId, to.startsAt));
		expect((await refusalOf(begun)).message).toContain('no longer be cancelled');
		await shop.asVisitor((tx) => cancelByVisitor(tx, orderId, late(to)));
		expect(await refundsOf(orderId)).toMatchObject([{ amountMinor: 1600, reason: 'visitor' }]);
	});

	test('follows the policy when the visitor had asked for another time', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const email = newAddress();
		const orderId = await buy(shop, from.id, { email });
		await move(orderId, to.id, { wishedBy: 'visitor' });
		expect((await lettersTo(email))[1]!.text).not.toContain('in full');
		await shop.asVisitor((tx) => cancelByVisitor(tx, orderId, late(to)));
		expect(await refundsOf(orderId)).toEqual([]);
		expect((await readOrderRow(shop, orderId)).status).toBe('cancelled');
	});

	test('moving and cancelling at the same moment: by the old terms or by the new, never between', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const seen = new Set<string>();
		for (let i = 0; i < 8; i++) {
			const orderId = await buy(shop, from.id);
			const now = late(from);
			const go = [
				() => move(orderId, to.id, { now }),
				() => shop.asVisitor((tx) => cancelByVisitor(tx, orderId, now))
			];
			if (i % 2) go.reverse();
			await Promise.allSettled(go.map((act) => act()));
			expect((await readOrderRow(shop, orderId)).status).toBe('cancelled');
			const moves = await movesOf(orderId);
			const back = (await refundsOf(orderId)).map(({ amountMinor }) => amountMinor);
			expect(back).toEqual(moves.length > 0 ? [1600] : []);
			seen.add(String(moves.length));
		}
		console.log(`ended with moves: ${[...seen].join(', ')}`);
		await expectSound();
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
		await move(goes, to.id);
		for (const orderId of [stays, goes, stays, goes]) {
			await callOffOrder({ operatorId: shop.operatorId, orderId, weatherCallId });
		}
		expect(await readOrderRow(shop, goes)).toMatchObject({ status: 'paid', slotId: to.id });
		expect(await refundsOf(goes)).toEqual([]);
		expect(await readOrderRow(shop, stays)).toMatchObject({ status: 'cancelled' });
		expect(await refundsOf(stays)).toMatchObject([{ amountMinor: 1600 }]);
		const told = await shop.asOwner((tx) => callOffProgress(tx, [from.id], createdAt));
		expect(told.map(({ orderId, state }) => [orderId, state]).sort()).toEqual(
			[
				[stays, 'refund_asked'],
				[goes, 'moved']
			].sort()
		);
		await expectSound();
	});

	test('once called off and paid back it can not be moved any more', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id);
		const weatherCallId = await call([from.id]);
		await callOffOrder({ operatorId: shop.operatorId, orderId, weatherCallId });
		expect((await refusalOf(move(orderId, to.id))).message).toContain('cancelled');
	});

	test('moving in while the slot is called off: refused, or paid back like the others', async () => {
		for (let i = 0; i < 4; i++) {
			const [from, to] = [freshSlot(), freshSlot()];
			const orderId = await buy(shop, from.id);
			const [moved, called] = await Promise.allSettled([move(orderId, to.id), call([to.id])]);
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
		await expectSound();
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
		await move(orderId, to.id);
		await move(orderId, from.id);
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
		await move(orderId, to.id);
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
		await expectSound();
	});
});
