import { eq } from 'drizzle-orm';
import { beforeEach, describe, expect, test } from 'vitest';
import { seenOf, type Chosen } from '../../../src/lib/conflict-deeds.ts';
import { keptSlot, plan, slot } from '../../../src/lib/server/db/schema/index.ts';
import { roles, type Role } from '../../../src/lib/server/db/schema/operators.ts';
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
import { lookAtConflicts } from '../../../src/lib/server/sites/conflicts.ts';
import { decideConflicts, goLive } from '../../../src/lib/server/sites/decide.ts';
import { makeLive } from '../../../src/lib/server/sites/plans.ts';
import { adminQuery } from '../../support/database.ts';
import { makeMember, type Person } from '../../support/people.ts';
import { emptyQueue } from '../../support/queue.ts';
import { refusalOf } from '../../support/refusals.ts';
import { addVersion, higherSun, type Replan } from '../../support/replan.ts';
import { buy, hold, openShop, readSlotRow, type Shop } from '../../support/shop.ts';

let shop: Shop;
let replan: Replan;
beforeEach(async () => {
	await emptyQueue();
	shop = await openShop();
	replan = higherSun(shop);
});

const reason = 'The curtain was moved, and the bow stands later.';
const asker = (person: Person = shop.owner, role: Role = 'owner') => ({
	operatorId: shop.operatorId,
	origin: {
		actor: { kind: 'member', userId: person.userId, name: person.name, role } as const,
		requestId: 'test'
	}
});
const look = async (version: number | null, now = new Date()) =>
	(await lookAtConflicts(asker(), { slug: shop.site.slug, version }, now))!;
const decisions = (digest: string | null, chosen: Chosen[]) => ({
	digest: digest ?? '',
	seen: seenOf(chosen),
	chosen,
	reason
});
const live = (version: number, digest: string | null, chosen: Chosen[] = []) =>
	goLive(asker(), { slug: shop.site.slug, version }, decisions(digest, chosen), new Date());
const decide = (digest: string | null, chosen: Chosen[]) =>
	decideConflicts(asker(), shop.site.slug, decisions(digest, chosen), new Date());
const stateOf = async (version: number) =>
	(
		await shop.asOwner((tx) =>
			tx.sql.query.plan.findMany({ where: eq(plan.siteId, shop.site.siteId) })
		)
	).find((one) => one.version === version)?.state;
const rowsOf = () =>
	shop.asOwner((tx) =>
		tx.sql.query.slot.findMany({
			where: eq(slot.operatorId, shop.operatorId),
			orderBy: [slot.startsAt, slot.id]
		})
	);
const jobsOf = (task: string) =>
	adminQuery<{ payload: { orderId: string } }>(
		`select payload from graphile_worker._private_jobs j
		join graphile_worker._private_tasks t on t.id = j.task_id where t.identifier = $1`,
		[task]
	);

test('exactly the sold and held slots outside the version’s windows are listed, with what is in them', async () => {
	const [first, second, third] = replan.outside as [Slot, Slot, Slot];
	await buy(shop, first.id, { adults: 2 });
	await buy(shop, first.id, { adults: 1, children: 1 });
	await hold(shop, second.id, { adults: 3 });
	for (const one of replan.inside.slice(0, 3)) await buy(shop, one.id);
	const version = await addVersion(shop, replan.body);
	const found = await look(version);
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
	expect((await look(null)).undecided).toEqual([]);
	expect((await look(await addVersion(shop, quarryPlan))).undecided).toEqual([]);
	expect(await shop.asOwner((tx) => countComing(tx, shop.site.slug, new Date()))).toEqual({
		slots: shop.slots.length,
		sold: 4,
		soldPlaces: 7,
		held: 1,
		heldPlaces: 3,
		free: shop.slots.length - 5
	});
});

type Slot = Shop['slots'][number];

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
	const found = await look(await addVersion(shop, replan.body));
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
	const found = await look(version);
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
	const { digest, undecided } = await look(version);
	expect(undecided).toHaveLength(3);
	const done = await live(version, digest, [
		{ slotId: kept.id, choice: 'keep' },
		{ slotId: moved.id, choice: `move:${target.id}` },
		{ slotId: off.id, choice: 'call_off' }
	]);
	expect(done).toMatchObject({ kept: 1, slotMoveIds: [expect.any(String)] });
	expect(done.weatherCallId).not.toBeNull();
	expect([await stateOf(1), await stateOf(version)]).toEqual(['retired', 'live']);
	expect(await readSlotRow(shop, kept.id)).toMatchObject({ status: 'open', sold: 1 });
	expect(await readSlotRow(shop, moved.id)).toMatchObject({ status: 'paused', sold: 3 });
	expect(await readSlotRow(shop, off.id)).toMatchObject({ status: 'called_off' });
	expect(await jobsOf('move_slot_order')).toHaveLength(2);
	expect(await jobsOf('call_off_order')).toHaveLength(1);
	// The season on sale is computed anew without being asked for.
	const computations = await shop.asOwner((tx) => listComputations(tx, shop.site.siteId));
	expect(computations).toMatchObject([{ state: 'waiting', daysDone: 0 }]);
	const after = await look(null);
	expect(after.undecided).toEqual([]);
	expect(after.kept).toMatchObject([{ conflict: { slotId: kept.id }, byName: shop.owner.name }]);
	expect(after.moving).toMatchObject([{ conflict: { slotId: moved.id } }]);

	// Another version asks anew.
	const next = await addVersion(shop, replan.body);
	expect((await look(next)).undecided.map(({ slotId }) => slotId)).toContain(kept.id);
	// And what was kept for this one is kept when it is live again.
	await shop.asOwner((tx) => makeLive(tx, shop.site.slug, 1));
	await shop.asOwner((tx) => makeLive(tx, shop.site.slug, version));
	expect((await look(null)).kept.map(({ conflict }) => conflict.slotId)).toEqual([kept.id]);
});

test('made live with no decision, the slots are untouched and listed as undecided', async () => {
	const [one, two] = replan.outside as [Slot, Slot];
	await buy(shop, one.id);
	await hold(shop, two.id);
	const version = await addVersion(shop, replan.body);
	const before = await rowsOf();
	await shop.asOwner((tx) => makeLive(tx, shop.site.slug, version));
	expect(await rowsOf()).toEqual(before);
	const found = await look(null);
	expect(found.undecided.map(({ slotId }) => slotId)).toEqual([one.id, two.id]);
	// Somebody who buys in an old slot afterwards is a conflict too.
	await buy(shop, replan.outside[2]!.id);
	expect((await look(null)).undecided).toHaveLength(3);
	// A conflict that is not named in the form stays undecided.
	const { digest } = await look(null);
	await decide(digest, [{ slotId: one.id, choice: 'keep' }]);
	expect((await look(null)).undecided.map(({ slotId }) => slotId)).toEqual([
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
	const { undecided, digest } = await look(null);
	expect(undecided.map(({ slotId }) => slotId)).toEqual([sold.id]);
	const known = new Set(shop.slots.map(({ id }) => id));
	const fresh = undecided[0]!.targets.filter(({ id }) => !known.has(id));
	expect(fresh.length).toBeGreaterThan(0);
	const done = await decide(digest, [{ slotId: sold.id, choice: `move:${fresh[0]!.id}` }]);
	const [job] = await jobsOf('move_slot_order');
	await moveSlotOrder({
		operatorId: shop.operatorId,
		slotMoveId: done.slotMoveIds[0]!,
		orderId: job!.payload.orderId
	});
	expect(await readSlotRow(shop, fresh[0]!.id)).toMatchObject({ sold: 2 });
	expect((await look(null)).undecided).toEqual([]);
	expect((await look(null)).moving).toEqual([]);
});

test('what a move could not take along is listed again, with why', async () => {
	const sold = replan.outside[0]!;
	const orderId = await buy(shop, sold.id, { adults: 2 });
	const target = replan.inside.find(({ startsAt }) => startsAt > sold.startsAt)!;
	const version = await addVersion(shop, replan.body);
	const { digest } = await look(version);
	const { slotMoveIds } = await live(version, digest, [
		{ slotId: sold.id, choice: `move:${target.id}` }
	]);
	const [slotMoveId] = slotMoveIds as [string];
	await buy(shop, target.id, { adults: target.capacity - 1 });
	await moveSlotOrder({ operatorId: shop.operatorId, slotMoveId, orderId });
	const found = await look(null);
	expect(found.undecided).toMatchObject([
		{ slotId: sold.id, sold: 2, orders: 1, failedMoveId: slotMoveId }
	]);
	expect(found.undecided[0]!.targets.map(({ id }) => id)).not.toContain(target.id);
	await decide(found.digest, [{ slotId: sold.id, choice: 'keep' }]);
	expect((await look(null)).undecided).toEqual([]);
	expect(await readSlotRow(shop, sold.id)).toMatchObject({ sold: 2, status: 'paused' });
});

test('what was kept can be decided about anew', async () => {
	const sold = replan.outside[0]!;
	await buy(shop, sold.id);
	const version = await addVersion(shop, replan.body);
	const { digest } = await look(version);
	await live(version, digest, [{ slotId: sold.id, choice: 'keep' }]);
	const again = await look(null);
	await decide(again.digest, [{ slotId: sold.id, choice: 'call_off' }]);
	expect(await readSlotRow(shop, sold.id)).toMatchObject({ status: 'called_off' });
	expect((await look(null)).kept).toEqual([]);
});

describe('refused, with nothing done', () => {
	let version: number;
	let sold: Slot;
	beforeEach(async () => {
		sold = replan.outside[0]!;
		await buy(shop, sold.id);
		version = await addVersion(shop, replan.body);
	});
	const expectNothing = async () => {
		expect(await stateOf(version)).toBe('draft');
		expect(await readSlotRow(shop, sold.id)).toMatchObject({ status: 'open', sold: 1 });
		expect(await shop.asOwner((tx) => tx.sql.$count(keptSlot))).toBe(0);
		expect(await jobsOf('call_off_order')).toEqual([]);
		expect(await jobsOf('move_slot_order')).toEqual([]);
	};

	test('when somebody has bought since, or saved the plan', async () => {
		const { digest } = await look(version);
		await buy(shop, sold.id);
		const refusal = await refusalOf(
			live(version, digest, [{ slotId: sold.id, choice: 'call_off' }])
		);
		expect(refusal.message).toContain('changed since you looked');
		const newer = await look(version);
		await adminQuery(
			'update plan set revision = revision + 1 where operator_id = $1 and version = $2',
			[shop.operatorId, version]
		);
		expect((await refusalOf(live(version, newer.digest))).message).toContain('changed since');
		expect(await stateOf(version)).toBe('draft');
		expect(await readSlotRow(shop, sold.id)).toMatchObject({ status: 'open', sold: 2 });
	});

	test('when the numbers of other choices were seen', async () => {
		const { digest } = await look(version);
		const chosen = [{ slotId: sold.id, choice: 'call_off' }];
		for (const seen of ['', seenOf([{ slotId: sold.id, choice: `move:${sold.id}` }])]) {
			const work = goLive(
				asker(),
				{ slug: shop.site.slug, version },
				{ digest: digest!, seen, chosen, reason },
				new Date()
			);
			expect((await refusalOf(work)).message).toContain('Nothing is done yet');
		}
		await expectNothing();
	});

	test('when a slot is no conflict, or the target was not offered', async () => {
		const { digest } = await look(version);
		const wrong: Chosen[] = [
			{ slotId: replan.inside[0]!.id, choice: 'call_off' },
			{ slotId: sold.id, choice: `move:${replan.outside[1]!.id}` },
			{ slotId: sold.id, choice: `move:${sold.id}` },
			{ slotId: sold.id, choice: `move:${shop.operatorId}` }
		];
		for (const one of wrong) {
			expect((await refusalOf(live(version, digest, [one]))).kind).toBe('conflict');
		}
		await expectNothing();
	});

	test('when two slots together are too many for the one that both go to', async () => {
		const second = replan.outside[1]!;
		await buy(shop, second.id, { adults: 4 });
		const target = replan.inside.find(({ startsAt }) => startsAt > second.startsAt)!;
		await buy(shop, target.id, { adults: target.capacity - 4 });
		const { digest } = await look(version);
		const refusal = await refusalOf(
			live(version, digest, [
				{ slotId: sold.id, choice: `move:${target.id}` },
				{ slotId: second.id, choice: `move:${target.id}` }
			])
		);
		expect(refusal.message).toContain('too few places');
		await expectNothing();
	});

	test('when no reason is given to those who are moved or paid back', async () => {
		const { digest } = await look(version);
		const chosen = [{ slotId: sold.id, choice: 'call_off' }];
		const work = goLive(
			asker(),
			{ slug: shop.site.slug, version },
			{ digest: digest!, seen: seenOf(chosen), chosen, reason: '' },
			new Date()
		);
		expect(await refusalOf(work)).toMatchObject({ kind: 'invalid', field: 'reason' });
		await expectNothing();
	});

	test('for every role but planner and owner; and another operator learns nothing', async () => {
		const { digest } = await look(version);
		const planner = await makeMember(shop, 'planner');
		for (const role of roles.filter((one) => one !== 'owner' && one !== 'planner')) {
			const who = asker(await makeMember(shop, role), role);
			const asked = { slug: shop.site.slug, version };
			expect((await refusalOf(lookAtConflicts(who, asked, new Date()))).kind, role).toBe(
				'forbidden'
			);
			const work = goLive(who, asked, decisions(digest, []), new Date());
			expect((await refusalOf(work)).kind, role).toBe('forbidden');
			const deciding = decideConflicts(who, shop.site.slug, decisions(digest, []), new Date());
			expect((await refusalOf(deciding)).kind, role).toBe('forbidden');
		}
		await expectNothing();
		const other = await openShop();
		const theirs = lookAtConflicts(
			{ ...asker(other.owner), operatorId: other.operatorId },
			{ slug: `${shop.site.slug}-2`, version },
			new Date()
		);
		const none = await refusalOf(theirs);
		expect([none.kind, none.message]).toEqual(['not_found', 'There is no such site.']);
		const done = await goLive(
			asker(planner, 'planner'),
			{ slug: shop.site.slug, version },
			decisions(digest, [{ slotId: sold.id, choice: 'keep' }]),
			new Date()
		);
		expect(done.kept).toBe(1);
	});
});

test('the same decisions sent twice at once are done once', async () => {
	const [off, moved] = replan.outside as [Slot, Slot];
	const target = replan.inside.find(({ startsAt }) => startsAt > moved.startsAt)!;
	await buy(shop, off.id);
	await buy(shop, moved.id);
	const version = await addVersion(shop, replan.body);
	const { digest } = await look(version);
	const chosen = [
		{ slotId: off.id, choice: 'call_off' },
		{ slotId: moved.id, choice: `move:${target.id}` }
	];
	const done = await Promise.allSettled([1, 2, 3].map(() => live(version, digest, chosen)));
	expect(done.filter(({ status }) => status === 'fulfilled')).toHaveLength(1);
	for (const one of done) {
		if (one.status === 'rejected') expect(one.reason).toMatchObject({ kind: 'conflict' });
	}
	expect(await jobsOf('call_off_order')).toHaveLength(1);
	expect(await jobsOf('move_slot_order')).toHaveLength(1);
});

test('somebody buys in the very moment: what is called off is what was told, or nothing', async () => {
	const seen = new Set<string>();
	for (const [i, one] of replan.outside.slice(0, 5).entries()) {
		await buy(shop, one.id);
		const version = await addVersion(shop, replan.body);
		const { digest } = await look(version);
		const chosen = [{ slotId: one.id, choice: 'call_off' }];
		await emptyQueue();
		const go = [() => hold(shop, one.id), () => live(version, digest, chosen)];
		if (i % 2) go.reverse();
		const done = await Promise.allSettled(go.map((act) => act()));
		const decided = done[i % 2 ? 0 : 1]!;
		const bought = done[i % 2 ? 1 : 0]!;
		const jobs = await jobsOf('call_off_order');
		if (decided.status === 'fulfilled') {
			expect(jobs).toHaveLength(1);
			expect(bought.status).toBe('rejected');
		} else {
			expect(decided.reason).toMatchObject({ kind: 'conflict' });
			expect(jobs).toEqual([]);
			expect(bought.status).toBe('fulfilled');
		}
		seen.add(decided.status);
	}
	console.log(`deciding ended ${[...seen].join(' and ')}`);
});
