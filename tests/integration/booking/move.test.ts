import { and, eq } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { cancelPaidOrder } from '../../../src/lib/server/booking/cancel.ts';
import { orderCalendar } from '../../../src/lib/server/booking/enclosures.ts';
import { listMoveTargets, moveOrder } from '../../../src/lib/server/booking/move.ts';
import { cancelByVisitor } from '../../../src/lib/server/booking/orders.ts';
import { order, slot, trail } from '../../../src/lib/server/db/schema/index.ts';
import { roles, type Role } from '../../../src/lib/server/db/schema/operators.ts';
import { admit } from '../../../src/lib/server/gate/gate.ts';
import { drawUp } from '../../../src/lib/server/mail/enclosures.ts';
import { adminQuery } from '../../support/database.ts';
import { lettersTo } from '../../support/letters.ts';
import { asMember, makeMember, newAddress } from '../../support/people.ts';
import { expectSound, move, movesOf, refundsOf, ticketsOf } from '../../support/moves.ts';
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

const setStatus = (slotId: string, status: 'open' | 'paused' | 'called_off') =>
	shop.asOwner((tx) => tx.sql.update(slot).set({ status }).where(eq(slot.id, slotId)));
const scan = (slotId: string, typed: string) =>
	shop.asOwner((tx) => admit(tx, { slotId, typed }, new Date()));

test('a moved order has its places, tickets and letter in the new slot, and no money moves', async () => {
	const [from, to] = [freshSlot(), freshSlot()];
	const email = newAddress();
	const orderId = await buy(shop, from.id, { adults: 2, children: 1, email });
	const before = await ticketsOf(shop, orderId);
	const words = 'The west mast is being mended that day.';
	expect(await move(shop, orderId, to.id, { words })).toBe(true);

	const row = await readOrderRow(shop, orderId);
	expect(row).toMatchObject({ slotId: to.id, status: 'paid', totalMinor: 3850 });
	expect(await readSlotRow(shop, from.id)).toMatchObject({ sold: 0, held: 0, status: 'open' });
	expect(await readSlotRow(shop, to.id)).toMatchObject({ sold: 3, held: 0 });
	const tickets = await ticketsOf(shop, orderId);
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
	expect(await refundsOf(shop, orderId)).toEqual([]);
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
	await expectSound(shop);
});

test('the letters carry the pictures of their own codes, and the calendar entry follows the move', async () => {
	const [from, to] = [freshSlot(), freshSlot()];
	const email = newAddress();
	const orderId = await buy(shop, from.id, { email });
	const calendar = () => shop.asOwner((tx) => orderCalendar(tx, orderId));
	const field = (text: string | null, name: string) =>
		new RegExp(`^${name}:(.*)$`, 'm').exec(text ?? '')?.[1]?.trim();
	const first = await calendar();
	await move(shop, orderId, to.id);
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
	const done = await Promise.all(
		Array.from({ length: 6 }, () => move(shop, orderId, to.id, { moveId }))
	);
	expect(done.filter(Boolean)).toHaveLength(1);
	// An old page, sent again after the order has gone back: it does not go a second time.
	await move(shop, orderId, from.id);
	expect(await move(shop, orderId, to.id, { moveId })).toBe(false);
	expect((await readOrderRow(shop, orderId)).slotId).toBe(from.id);
	expect(await movesOf(shop, orderId)).toHaveLength(2);
	expect((await lettersTo(email)).map(({ kind }) => kind)).toEqual(['tickets', 'moved', 'moved']);
	const other = await buy(shop, from.id);
	expect((await refusalOf(move(shop, other, to.id, { moveId }))).message).toContain(
		'another order'
	);
	await expectSound(shop);
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
	const moves = orders.map(({ id }) => move(shop, id, target.id));
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
	await expectSound(shop);
});

test('orders that change places with one another do not wait for each other for ever', async () => {
	const [a, b] = [freshSlot(), freshSlot()];
	const there = await Promise.all(Array.from({ length: 4 }, () => buy(shop, a.id)));
	const back = await Promise.all(Array.from({ length: 4 }, () => buy(shop, b.id)));
	await Promise.all([
		...there.map((id) => move(shop, id, b.id)),
		...back.map((id) => move(shop, id, a.id)),
		hold(shop, a.id),
		hold(shop, b.id)
	]);
	expect(await readSlotRow(shop, a.id)).toMatchObject({ sold: 4, held: 1 });
	expect(await readSlotRow(shop, b.id)).toMatchObject({ sold: 4, held: 1 });
	await expectSound(shop);
});

describe('not moved', () => {
	const nothingChanged = async (orderId: string, slotId: string) => {
		expect((await readOrderRow(shop, orderId)).slotId).toBe(slotId);
		expect((await ticketsOf(shop, orderId)).some(({ status }) => status === 'moved')).toBe(false);
		expect(await movesOf(shop, orderId)).toEqual([]);
	};

	test('is an order with a used ticket', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id, { adults: 2 });
		const [first] = await ticketsOf(shop, orderId);
		await scan(from.id, first!.code);
		expect((await refusalOf(move(shop, orderId, to.id))).message).toContain('has been used');
		await nothingChanged(orderId, from.id);
	});

	test('is an order that is pending, cancelled or expired', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const pending = await hold(shop, from.id);
		expect((await refusalOf(move(shop, pending, to.id))).message).toContain('not paid yet');
		await lapse(pending);
		await shop.asOwner((tx) =>
			tx.sql
				.update(order)
				.set({ status: 'expired', closedAt: new Date(), closedReason: 'hold_lapsed' })
				.where(eq(order.id, pending))
		);
		expect((await refusalOf(move(shop, pending, to.id))).kind).toBe('conflict');
		const cancelled = await buy(shop, from.id);
		await shop.asVisitor((tx) => cancelByVisitor(tx, cancelled, new Date()));
		expect((await refusalOf(move(shop, cancelled, to.id))).message).toContain('cancelled');
		await nothingChanged(cancelled, from.id);
	});

	test('is any order to a slot that is full, paused, called off, begun, its own or not there', async () => {
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id, { adults: 2 });
		await buy(shop, to.id, { adults: to.capacity - 1 });
		expect((await refusalOf(move(shop, orderId, to.id))).message).toContain('too few places');
		const begun = new Date(to.startsAt.getTime());
		expect((await refusalOf(move(shop, orderId, to.id, { now: begun }))).message).toContain(
			'begun'
		);
		await setStatus(to.id, 'paused');
		expect((await refusalOf(move(shop, orderId, to.id))).message).toContain('paused');
		await setStatus(to.id, 'called_off');
		expect((await refusalOf(move(shop, orderId, to.id))).message).toContain('called off');
		expect((await refusalOf(move(shop, orderId, from.id))).message).toContain('already');
		expect((await refusalOf(move(shop, orderId, uuidv7()))).kind).toBe('not_found');
		await nothingChanged(orderId, from.id);
		await expectSound(shop);
	});

	test('is an order of another operator, nor to a slot of one: both are unknown here', async () => {
		const other = await openShop();
		const [from, to] = [freshSlot(), freshSlot()];
		const orderId = await buy(shop, from.id);
		const theirs = await buy(other, other.slots[0]!.id);
		const toTheirs = await refusalOf(move(shop, orderId, other.slots[1]!.id));
		const toNothing = await refusalOf(move(shop, orderId, uuidv7()));
		expect([toTheirs.kind, toTheirs.message]).toEqual([toNothing.kind, toNothing.message]);
		const ofTheirs = await refusalOf(move(shop, theirs, to.id));
		const ofNothing = await refusalOf(move(shop, uuidv7(), to.id));
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
