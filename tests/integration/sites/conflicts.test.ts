import { eq } from 'drizzle-orm';
import { beforeEach, expect, test } from 'vitest';
import { slot } from '../../../src/lib/server/db/schema/index.ts';
import { quarryPlan } from '../../../src/lib/server/demo/plans.ts';
import { moveSlotOrder } from '../../../src/lib/server/booking/move-slot.ts';
import { demandProgramme, saveProgramme } from '../../../src/lib/server/programmes/programmes.ts';
import { previewProgramme, publishProgramme } from '../../../src/lib/server/programmes/publish.ts';
import {
	askForWindows,
	computeWindows,
	listComputations
} from '../../../src/lib/server/sites/compute.ts';
import { countComing } from '../../../src/lib/server/sites/conflict-basis.ts';
import { makeLive } from '../../../src/lib/server/sites/plans.ts';
import { adminQuery } from '../../support/database.ts';
import { plannerOf } from '../../support/planner.ts';
import { emptyQueue, jobsOf } from '../../support/queue.ts';
import { addVersion, higherSun, type Replan } from '../../support/replan.ts';
import { buy, hold, openShop, readSlotRow, type Shop } from '../../support/shop.ts';

type Slot = Shop['slots'][number];

let shop: Shop;
let planner: ReturnType<typeof plannerOf>;
let replan: Replan;
beforeEach(async () => {
	await emptyQueue();
	shop = await openShop();
	planner = plannerOf(shop);
	replan = higherSun(shop);
});

const rowsOf = () =>
	shop.asOwner((tx) =>
		tx.sql.query.slot.findMany({
			where: eq(slot.operatorId, shop.operatorId),
			orderBy: [slot.startsAt, slot.id]
		})
	);

test('exactly the sold and held slots outside the version’s windows are listed, with what is in them', async () => {
	const [first, second, third] = replan.outside as [Slot, Slot, Slot];
	await buy(shop, first.id, { adults: 2 });
	await buy(shop, first.id, { adults: 1, children: 1 });
	await hold(shop, second.id, { adults: 3 });
	for (const one of replan.inside.slice(0, 3)) await buy(shop, one.id);
	const version = await addVersion(shop, replan.body);
	const found = await planner.look(version);
	expect(found.undecided.map(({ slotId }) => slotId)).toEqual([first.id, second.id]);
	expect(found.undecided[0]).toMatchObject({
		sold: 4,
		held: 0,
		orders: 2,
		pending: 0,
		amountMinor: 3 * 1600 + 650
	});
	expect(found.undecided[1]).toMatchObject({ sold: 0, held: 3, orders: 0, pending: 1 });
	for (const one of found.undecided) {
		const own = replan.windows.filter(({ date }) => date === one.localDate);
		const shared = own.map(
			({ startMs, endMs }) => Math.min(endMs, +one.endsAt) - Math.max(startMs, +one.startsAt)
		);
		const covered = shared.reduce((sum, ms) => sum + Math.max(0, ms), 0) / 60_000;
		expect(one.coveredMinutes).toBeCloseTo(covered, 9);
		expect(one.coveredMinutes).toBeLessThan(one.minutes);
		if (own.length > 0) expect(one.nearest).not.toBeNull();
		// Offered are slots of the version's windows alone.
		const insideIds = replan.inside.map(({ id }) => id);
		expect(one.targets.length).toBeGreaterThan(0);
		for (const { id } of one.targets) expect(insideIds).toContain(id);
	}
	// Nobody is in the third: there is nothing to decide.
	expect(found.undecided.map(({ slotId }) => slotId)).not.toContain(third.id);
	// The version that is live has no conflict, nor has one like it.
	expect((await planner.look(null)).undecided).toEqual([]);
	expect((await planner.look(await addVersion(shop, quarryPlan))).undecided).toEqual([]);
	expect(await shop.asOwner((tx) => countComing(tx, shop.site.slug, new Date()))).toEqual({
		slots: shop.slots.length,
		sold: 4,
		soldPlaces: 7,
		held: 1,
		heldPlaces: 3,
		free: shop.slots.length - 5
	});
});

test('a slot that begins or ends with its window is inside; one second beyond, it is a conflict', async () => {
	const lengthMs = 20 * 60_000;
	// Days with a window long enough for both, of whose start and end the live windows hold more.
	const days = replan.windows.filter(
		(one) =>
			one.endMs - one.startMs >= 3 * lengthMs &&
			replan.outside.some(({ localDate }) => localDate === one.date) &&
			one.startMs > Date.now() + 3_600_000
	);
	const [exact, over] = [days[0]!, days[1]!];
	const place = async (date: string, startMs: number) => {
		const like = shop.slots.find(({ localDate }) => localDate === date)!;
		const [holding] = await adminQuery<{ id: string; starts_at: Date; ends_at: Date }>(
			`select id, starts_at, ends_at from bow_window where operator_id = $1 and starts_at <= $2 and ends_at >= $3`,
			[shop.operatorId, new Date(startMs), new Date(startMs + lengthMs)]
		);
		const { id: _, ...row } = like;
		const [made] = await shop.asOwner((tx) =>
			tx.sql
				.insert(slot)
				.values({
					...row,
					windowId: holding!.id,
					windowStartsAt: holding!.starts_at,
					windowEndsAt: holding!.ends_at,
					startsAt: new Date(startMs),
					endsAt: new Date(startMs + lengthMs)
				})
				.returning({ id: slot.id })
		);
		await buy(shop, made!.id);
		return made!.id;
	};
	await adminQuery('delete from slot where operator_id = $1 and local_date = any($2)', [
		shop.operatorId,
		[exact.date, over.date]
	]);
	const inside = [
		await place(exact.date, exact.startMs),
		await place(exact.date, exact.endMs - lengthMs)
	];
	const early = await place(over.date, over.startMs - 1000);
	const found = await planner.look(await addVersion(shop, replan.body));
	const ids = found.undecided.map(({ slotId }) => slotId);
	for (const id of inside) expect(ids).not.toContain(id);
	expect(ids).toEqual([early]);
	const [conflict] = found.undecided;
	expect(conflict!.coveredMinutes).toBeCloseTo(20 - 1 / 60, 6);
	expect(conflict!.nearest).toEqual({
		startsAt: new Date(over.startMs),
		endsAt: new Date(over.endMs)
	});
});

test('a zone that the version no longer has makes every sold slot of it a conflict', async () => {
	await buy(shop, replan.inside[0]!.id);
	const [zone] = quarryPlan.zones;
	const version = await addVersion(shop, { ...quarryPlan, zones: [{ ...zone!, name: 'Lawn' }] });
	const found = await planner.look(version);
	expect(found.undecided).toHaveLength(1);
	expect(found.undecided[0]).toMatchObject({ zoneGone: true, nearest: null, targets: [] });
});

test('going live does what was chosen for each, all at once, and keeps is not asked again', async () => {
	const [kept, moved, off] = replan.outside as [Slot, Slot, Slot];
	const target = replan.inside.find(({ startsAt }) => startsAt > moved.startsAt)!;
	await buy(shop, kept.id);
	await buy(shop, moved.id, { adults: 2 });
	await buy(shop, moved.id, { adults: 1 });
	await buy(shop, off.id, { adults: 2 });
	const version = await addVersion(shop, replan.body);
	const { digest, undecided } = await planner.look(version);
	expect(undecided).toHaveLength(3);
	const done = await planner.live(version, digest, [
		{ slotId: kept.id, choice: 'keep' },
		{ slotId: moved.id, choice: `move:${target.id}` },
		{ slotId: off.id, choice: 'call_off' }
	]);
	expect(done).toMatchObject({ kept: 1, slotMoveIds: [expect.any(String)] });
	expect(done.weatherCallId).not.toBeNull();
	expect([await planner.stateOf(1), await planner.stateOf(version)]).toEqual(['retired', 'live']);
	expect(await readSlotRow(shop, kept.id)).toMatchObject({ status: 'open', sold: 1 });
	expect(await readSlotRow(shop, moved.id)).toMatchObject({ status: 'paused', sold: 3 });
	expect(await readSlotRow(shop, off.id)).toMatchObject({ status: 'called_off' });
	expect(await jobsOf('move_slot_order')).toHaveLength(2);
	expect(await jobsOf('call_off_order')).toHaveLength(1);
	// The season on sale is computed anew without being asked for.
	const computations = await shop.asOwner((tx) => listComputations(tx, shop.site.siteId));
	expect(computations).toMatchObject([{ state: 'waiting', daysDone: 0 }]);
	const after = await planner.look(null);
	expect(after.undecided).toEqual([]);
	expect(after.kept).toMatchObject([{ conflict: { slotId: kept.id }, byName: shop.owner.name }]);
	expect(after.moving).toMatchObject([{ conflict: { slotId: moved.id } }]);

	// Another version asks anew.
	const next = await addVersion(shop, replan.body);
	expect((await planner.look(next)).undecided.map(({ slotId }) => slotId)).toContain(kept.id);
	// And what was kept for this one is kept when it is live again.
	await shop.asOwner((tx) => makeLive(tx, shop.site.slug, 1));
	await shop.asOwner((tx) => makeLive(tx, shop.site.slug, version));
	expect((await planner.look(null)).kept.map(({ conflict }) => conflict.slotId)).toEqual([kept.id]);
});

test('made live with no decision, the slots are untouched and listed as undecided', async () => {
	const [one, two] = replan.outside as [Slot, Slot];
	await buy(shop, one.id);
	await hold(shop, two.id);
	const version = await addVersion(shop, replan.body);
	const before = await rowsOf();
	await shop.asOwner((tx) => makeLive(tx, shop.site.slug, version));
	expect(await rowsOf()).toEqual(before);
	const found = await planner.look(null);
	expect(found.undecided.map(({ slotId }) => slotId)).toEqual([one.id, two.id]);
	// Somebody who buys in an old slot afterwards is a conflict too.
	await buy(shop, replan.outside[2]!.id);
	expect((await planner.look(null)).undecided).toHaveLength(3);
	// A conflict that is not named in the form stays undecided.
	const { digest } = await planner.look(null);
	// It stays so too when it is left for later.
	await planner.decide(digest, [
		{ slotId: one.id, choice: 'keep' },
		{ slotId: two.id, choice: 'later' }
	]);
	expect((await planner.look(null)).undecided.map(({ slotId }) => slotId)).toEqual([
		two.id,
		replan.outside[2]!.id
	]);
});

test('once the programme is published anew, its slots are what a conflict can move to', async () => {
	const sold = replan.outside[0]!;
	await buy(shop, sold.id, { adults: 2 });
	const version = await addVersion(shop, replan.body);
	await shop.asOwner((tx) => makeLive(tx, shop.site.slug, version));
	const { siteId, programmeId, slug } = shop.site;
	const { programme, prices } = await shop.asOwner((tx) =>
		demandProgramme(tx, siteId, programmeId)
	);
	const computationId = await shop.asOwner((tx) =>
		askForWindows(tx, siteId, { from: programme.seasonFrom, to: programme.seasonTo })
	);
	await computeWindows({ operatorId: shop.operatorId, computationId }, { number: 1, of: 1 });
	await shop.asOwner((tx) =>
		saveProgramme(
			tx,
			{ slug, id: programmeId },
			{ ...programme, slotMinutes: 15, gapMinutes: 5, gridMinutes: 5, prices: [...prices] }
		)
	);
	const now = new Date();
	const preview = await shop.asOwner((tx) => previewProgramme(tx, slug, programmeId, now));
	expect(preview.difference!.staying).toMatchObject([
		{ slot: { id: sold.id }, outsideWindows: true }
	]);
	await shop.asOwner((tx) => publishProgramme(tx, slug, programmeId, preview.digest, now));
	const { undecided, digest } = await planner.look(null);
	expect(undecided.map(({ slotId }) => slotId)).toEqual([sold.id]);
	const known = new Set(shop.slots.map(({ id }) => id));
	const fresh = undecided[0]!.targets.filter(({ id }) => !known.has(id));
	expect(fresh.length).toBeGreaterThan(0);
	const done = await planner.decide(digest, [{ slotId: sold.id, choice: `move:${fresh[0]!.id}` }]);
	const [job] = await jobsOf('move_slot_order');
	await moveSlotOrder({
		operatorId: shop.operatorId,
		slotMoveId: done.slotMoveIds[0]!,
		orderId: job!.payload.orderId
	});
	expect(await readSlotRow(shop, fresh[0]!.id)).toMatchObject({ sold: 2 });
	expect((await planner.look(null)).undecided).toEqual([]);
	expect((await planner.look(null)).moving).toEqual([]);
});

test('what a move could not take along is listed again, with why', async () => {
	const sold = replan.outside[0]!;
	const orderId = await buy(shop, sold.id, { adults: 2 });
	const target = replan.inside.find(({ startsAt }) => startsAt > sold.startsAt)!;
	const version = await addVersion(shop, replan.body);
	const { digest } = await planner.look(version);
	const { slotMoveIds } = await planner.live(version, digest, [
		{ slotId: sold.id, choice: `move:${target.id}` }
	]);
	const [slotMoveId] = slotMoveIds as [string];
	await buy(shop, target.id, { adults: target.capacity - 1 });
	await moveSlotOrder({ operatorId: shop.operatorId, slotMoveId, orderId });
	const found = await planner.look(null);
	expect(found.undecided).toMatchObject([
		{ slotId: sold.id, sold: 2, orders: 1, failedMoveId: slotMoveId }
	]);
	expect(found.undecided[0]!.targets.map(({ id }) => id)).not.toContain(target.id);
	await planner.decide(found.digest, [{ slotId: sold.id, choice: 'keep' }]);
	expect((await planner.look(null)).undecided).toEqual([]);
	expect(await readSlotRow(shop, sold.id)).toMatchObject({ sold: 2, status: 'paused' });
});

test('what was kept can be decided about anew', async () => {
	const sold = replan.outside[0]!;
	await buy(shop, sold.id);
	const version = await addVersion(shop, replan.body);
	const { digest } = await planner.look(version);
	await planner.live(version, digest, [{ slotId: sold.id, choice: 'keep' }]);
	const again = await planner.look(null);
	await planner.decide(again.digest, [{ slotId: sold.id, choice: 'call_off' }]);
	expect(await readSlotRow(shop, sold.id)).toMatchObject({ status: 'called_off' });
	expect((await planner.look(null)).kept).toEqual([]);
});
