import { and, eq, inArray } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import { sendSignal } from '../../../docker-free-dev/lib/processes.ts';
import {
	demandSlotMove,
	moveSlotOrder,
	movesUnderWay,
	placesComing,
	startSlotMove
} from '../../../src/lib/server/booking/move-slot.ts';
import { settleOrder } from '../../../src/lib/server/booking/settle.ts';
import { orderMove, slot, slotMoveOrder, ticket } from '../../../src/lib/server/db/schema/index.ts';
import { roles, type Role } from '../../../src/lib/server/db/schema/operators.ts';
import { admit } from '../../../src/lib/server/gate/gate.ts';
import { demandProgramme, saveProgramme } from '../../../src/lib/server/programmes/programmes.ts';
import { previewProgramme, publishProgramme } from '../../../src/lib/server/programmes/publish.ts';
import { setSlotPaused } from '../../../src/lib/server/programmes/slots.ts';
import { callOff, callOffOrder } from '../../../src/lib/server/weather/call-off.ts';
import { adminQuery, withDatabase } from '../../support/database.ts';
import { lettersTo } from '../../support/letters.ts';
import { asMember, makeMember, newAddress } from '../../support/people.ts';
import { startTestWorker, type TestProcess } from '../../support/processes.ts';
import { emptyQueue } from '../../support/queue.ts';
import { refusalOf } from '../../support/refusals.ts';
import {
	buy,
	hold,
	lapse,
	openShop,
	payAtService,
	readOrderRow,
	readSlotRow,
	type Shop
} from '../../support/shop.ts';
import { until } from '../../support/until.ts';

let shop: Shop;
let worker: TestProcess | undefined;
let next = 0;
/** A slot of its own for each test. */
const freshSlot = () => shop.slots[next++]!;

beforeAll(async () => {
	shop = await openShop();
});
beforeEach(emptyQueue);
afterAll(async () => {
	await worker?.stop();
});

const words = 'The west mast is being mended.';
const start = (fromSlotId: string, toSlotId: string) =>
	shop.asOwner((tx) => startSlotMove(tx, { fromSlotId, toSlotId, words }, new Date()));
const see = (id: string) => shop.asOwner((tx) => demandSlotMove(tx, id));
const runJob = (slotMoveId: string, orderId: string) =>
	moveSlotOrder({ operatorId: shop.operatorId, orderId, slotMoveId });
const movesOf = (orderId: string) =>
	shop.asOwner((tx) => tx.sql.query.orderMove.findMany({ where: eq(orderMove.orderId, orderId) }));

test('everybody of a slot is moved once, though the worker is killed in the middle', async () => {
	const [from, to] = [freshSlot(), freshSlot()];
	const emails = Array.from({ length: 8 }, newAddress);
	const orders: string[] = [];
	for (const email of emails) orders.push(await buy(shop, from.id, { email }));
	await emptyQueue();
	const id = await start(from.id, to.id);
	// Two orders are held by somebody else for a while: the kill falls when the rest is done.
	await withDatabase('admin', async (client) => {
		await client.query('begin');
		await client.query('select 1 from "order" where id = any($1) for update', [orders.slice(4, 6)]);
		worker = await startTestWorker();
		await until('most of them moved', async () => {
			const { rows } = await see(id);
			return rows.filter(({ state }) => state === 'moved').length === 6;
		});
		const killed = worker.pid()!;
		expect(sendSignal(killed, 'SIGKILL')).toBe(true);
		await until('the end of the killed worker', () => Promise.resolve(worker!.pid() !== killed));
		await client.query('rollback');
	});
	await until('all of them moved', async () => {
		const { rows } = await see(id);
		return rows.every(({ state }) => state === 'moved');
	});
	for (const orderId of orders) {
		expect(await readOrderRow(shop, orderId)).toMatchObject({ slotId: to.id, status: 'paid' });
		expect(await movesOf(orderId)).toMatchObject([
			{ wishedBy: 'operator', slotMoveId: id, movedByName: shop.owner.name, words }
		]);
	}
	for (const email of emails) {
		const letters = await lettersTo(email);
		expect(letters.map(({ kind }) => kind)).toEqual(['tickets', 'moved']);
		expect(letters[1]!.text).toContain(words);
	}
	expect(await readSlotRow(shop, from.id)).toMatchObject({ sold: 0, status: 'paused' });
	expect(await readSlotRow(shop, to.id)).toMatchObject({ sold: 8, status: 'open' });
	await worker!.stop();
	worker = undefined;
});

test('a job that runs again, alone or with another, moves nobody twice', async () => {
	const [from, to] = [freshSlot(), freshSlot()];
	const orderId = await buy(shop, from.id);
	const id = await start(from.id, to.id);
	await Promise.all([runJob(id, orderId), runJob(id, orderId)]);
	await runJob(id, orderId);
	expect(await movesOf(orderId)).toHaveLength(1);
	expect((await see(id)).rows).toMatchObject([{ state: 'moved', fault: null }]);
});

test('nobody buys in the old slot meanwhile, and it is not put on sale before the end', async () => {
	const [from, to] = [freshSlot(), freshSlot()];
	const orderId = await buy(shop, from.id);
	const id = await start(from.id, to.id);
	expect((await refusalOf(hold(shop, from.id))).message).toContain('no longer for sale');
	const again = () => shop.asOwner((tx) => setSlotPaused(tx, from.id, false));
	expect((await refusalOf(again())).message).toContain('being moved');
	expect((await refusalOf(start(from.id, to.id))).message).toContain('being moved already');
	await runJob(id, orderId);
	await again();
	expect(await readSlotRow(shop, from.id)).toMatchObject({ status: 'open', sold: 0 });
});

test('what can not go is named with the reason, and stays as it was', async () => {
	const [from, to] = [freshSlot(), freshSlot()];
	const [used, late, good] = [
		await buy(shop, from.id, { adults: 2 }),
		await buy(shop, from.id, { adults: 3 }),
		await buy(shop, from.id, { adults: 1 })
	];
	const [first] = await shop.asOwner((tx) =>
		tx.sql.query.ticket.findMany({ where: eq(ticket.orderId, used) })
	);
	const id = await start(from.id, to.id);
	await shop.asOwner((tx) => admit(tx, { slotId: from.id, typed: first!.code }, new Date()));
	// Others buy in the new slot before the jobs come to their turn.
	await buy(shop, to.id, { adults: to.capacity - 1 });
	for (const orderId of [used, late, good]) await runJob(id, orderId);
	const { rows } = await see(id);
	expect(rows.map(({ orderId, state, fault }) => [orderId, state, fault])).toEqual([
		[used, 'failed', 'A ticket of this order has been used: it can not be moved.'],
		[late, 'failed', 'That slot has too few places left. Choose another.'],
		[good, 'moved', null]
	]);
	for (const orderId of [used, late]) {
		expect(await readOrderRow(shop, orderId)).toMatchObject({ slotId: from.id, status: 'paid' });
	}
	expect(await readSlotRow(shop, from.id)).toMatchObject({ sold: 5, status: 'paused' });
	// It is over, and a person can decide again.
	expect(await shop.asOwner((tx) => movesUnderWay(tx, { slotIds: [from.id] }))).toEqual(new Map());
	const elsewhere = freshSlot();
	const second = await start(from.id, elsewhere.id);
	await runJob(second, late);
	expect((await readOrderRow(shop, late)).slotId).toBe(elsewhere.id);
});

test('who is just paying is moved after paying; who does not pay is let go', async () => {
	const [from, to] = [freshSlot(), freshSlot()];
	const [pays, leaves] = [await hold(shop, from.id), await hold(shop, from.id)];
	const id = await start(from.id, to.id);
	for (const orderId of [pays, leaves]) await runJob(id, orderId);
	expect((await see(id)).rows.map(({ state }) => state)).toEqual(['waiting', 'waiting']);
	const again = await adminQuery<{ run_at: Date }>(
		`select run_at from graphile_worker._private_jobs j join graphile_worker._private_tasks t on t.id = j.task_id
		where t.identifier = 'move_slot_order' and j.payload ->> 'orderId' = $1 order by run_at desc`,
		[pays]
	);
	const { holdUntil } = await readOrderRow(shop, pays);
	expect(+again[0]!.run_at).toBeGreaterThan(+holdUntil);
	await payAtService(shop, pays);
	await settleOrder(shop.operatorId, pays, 'return');
	await lapse(leaves);
	await settleOrder(shop.operatorId, leaves, 'hold_end');
	for (const orderId of [pays, leaves]) await runJob(id, orderId);
	expect((await readOrderRow(shop, pays)).slotId).toBe(to.id);
	const states = new Map((await see(id)).rows.map(({ orderId, state }) => [orderId, state]));
	expect([states.get(pays), states.get(leaves)]).toEqual(['moved', 'gone']);
});

test('called off while it is being moved: everybody ends moved or paid back, nobody both', async () => {
	const [from, to] = [freshSlot(), freshSlot()];
	const orders = await Promise.all(Array.from({ length: 6 }, () => buy(shop, from.id)));
	const id = await start(from.id, to.id);
	const weatherCallId = await shop.asOwner((tx) =>
		callOff(tx, { slotIds: [from.id], reason: 'Gusts above the limit.' }, new Date())
	);
	await Promise.all(
		orders.flatMap((orderId, i) => {
			const jobs = [
				() => runJob(id, orderId),
				() => callOffOrder({ operatorId: shop.operatorId, orderId, weatherCallId })
			];
			if (i % 2) jobs.reverse();
			return jobs.map((job) => job());
		})
	);
	const states = new Map((await see(id)).rows.map(({ orderId, state }) => [orderId, state]));
	for (const orderId of orders) {
		const { status, slotId } = await readOrderRow(shop, orderId);
		const refunds = await adminQuery('select 1 from refund where order_id = $1', [orderId]);
		if (states.get(orderId) === 'moved') {
			expect([status, slotId, refunds.length]).toEqual(['paid', to.id, 0]);
		} else {
			expect([states.get(orderId), status, slotId]).toEqual(['gone', 'cancelled', from.id]);
			expect(refunds).toHaveLength(1);
		}
	}
});

test('two slots moved to one another’s places at once, with buyers, end sound', async () => {
	const [a, b, c] = [freshSlot(), freshSlot(), freshSlot()];
	for (const one of [a, b]) {
		for (let i = 0; i < 3; i++) await buy(shop, one.id);
	}
	const done = await Promise.allSettled([
		start(a.id, b.id),
		start(b.id, c.id),
		buy(shop, b.id),
		buy(shop, c.id),
		buy(shop, a.id)
	]);
	for (const one of done) {
		// Refused at most: a database that sees two wait for each other would throw something else.
		if (one.status === 'rejected') expect(one.reason).toMatchObject({ kind: 'conflict' });
	}
	const waiting = await shop.asOwner((tx) =>
		tx.sql.query.slotMoveOrder.findMany({
			where: and(
				eq(slotMoveOrder.state, 'waiting'),
				inArray(
					slotMoveOrder.slotMoveId,
					done.slice(0, 2).flatMap((one) => (one.status === 'fulfilled' ? [one.value] : []))
				)
			)
		})
	);
	const places = await shop.asOwner((tx) => placesComing(tx, [b.id, c.id]));
	const told = [...places.values()].reduce((sum, one) => sum + one, 0);
	expect(told).toBe(waiting.length);
	await Promise.all(waiting.map(({ slotMoveId, orderId }) => runJob(slotMoveId, orderId)));
	for (const one of [a, b, c]) {
		const { sold, held, capacity } = await readSlotRow(shop, one.id);
		expect(sold + held).toBeLessThanOrEqual(capacity);
	}
	expect(await shop.asOwner((tx) => placesComing(tx, [b.id, c.id]))).toEqual(new Map());
});

test('a slot that everybody has left goes with the next publishing, and its history stays', async () => {
	const [from, to] = [freshSlot(), freshSlot()];
	const orderId = await buy(shop, from.id);
	const id = await start(from.id, to.id);
	await runJob(id, orderId);
	await shop.asOwner(async (tx) => {
		const { programme, prices } = await demandProgramme(
			tx,
			shop.site.siteId,
			shop.site.programmeId
		);
		await saveProgramme(
			tx,
			{ slug: shop.site.slug, id: programme.id },
			{ ...programme, slotMinutes: 25, prices: prices.map((one) => ({ ...one })) }
		);
	});
	await shop.asOwner(async (tx) => {
		const now = new Date();
		const preview = await previewProgramme(tx, shop.site.slug, shop.site.programmeId, now);
		expect(preview.difference!.removed.map((one) => one.id)).toContain(from.id);
		await publishProgramme(tx, shop.site.slug, shop.site.programmeId, preview.digest, now);
	});
	expect((await readSlotRow(shop, from.id)).status).toBe('called_off');
	expect((await see(id)).rows).toHaveLength(1);
	expect((await readOrderRow(shop, orderId)).slotId).toBe(to.id);
});

test('a planner or owner alone begins a move; another operator learns nothing of it', async () => {
	const fresh = await openShop();
	const [from, to] = [fresh.slots[0]!, fresh.slots[1]!];
	await buy(fresh, from.id);
	const wanted = { fromSlotId: from.id, toSlotId: to.id, words };
	const go = async (role: Role) => {
		const person = await makeMember(fresh, role);
		return asMember(fresh, person, role, (tx) => startSlotMove(tx, wanted, new Date()));
	};
	for (const role of roles.filter((one) => one !== 'owner' && one !== 'planner')) {
		expect((await refusalOf(go(role))).kind, role).toBe('forbidden');
	}
	const theirs = shop.asOwner((tx) => startSlotMove(tx, wanted, new Date()));
	expect((await refusalOf(theirs)).kind).toBe('not_found');
	const id = await go('planner');
	expect((await refusalOf(shop.asOwner((tx) => demandSlotMove(tx, id)))).kind).toBe('not_found');
	const rewritten = fresh.asOwner((tx) =>
		tx.sql.update(slotMoveOrder).set({ orderId: from.id }).where(eq(slotMoveOrder.slotMoveId, id))
	);
	await expect(rewritten).rejects.toMatchObject({ cause: { code: '42501' } });
	const empty = fresh.asOwner((tx) =>
		tx.sql.update(slot).set({ status: 'paused' }).where(eq(slot.id, to.id))
	);
	await empty;
	const paused = fresh.asOwner((tx) =>
		startSlotMove(tx, { ...wanted, fromSlotId: to.id, toSlotId: from.id }, new Date())
	);
	expect((await refusalOf(paused)).kind).toBe('conflict');
});
