import { beforeEach, describe, expect, test } from 'vitest';
import { seenOf, type Chosen } from '../../../src/lib/conflict-deeds.ts';
import { keptSlot } from '../../../src/lib/server/db/schema/index.ts';
import { roles } from '../../../src/lib/server/db/schema/operators.ts';
import { lookAtConflicts } from '../../../src/lib/server/sites/conflicts.ts';
import { decideConflicts, goLive } from '../../../src/lib/server/sites/decide.ts';
import { adminQuery } from '../../support/database.ts';
import { makeMember } from '../../support/people.ts';
import { plannerOf, reason } from '../../support/planner.ts';
import { emptyQueue, jobsOf } from '../../support/queue.ts';
import { refusalOf } from '../../support/refusals.ts';
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

describe('refused, with nothing done', () => {
	let version: number;
	let sold: Slot;
	beforeEach(async () => {
		sold = replan.outside[0]!;
		await buy(shop, sold.id);
		version = await addVersion(shop, replan.body);
	});
	const expectNothing = async () => {
		expect(await planner.stateOf(version)).toBe('draft');
		expect(await readSlotRow(shop, sold.id)).toMatchObject({ status: 'open', sold: 1 });
		expect(await shop.asOwner((tx) => tx.sql.$count(keptSlot))).toBe(0);
		expect(await jobsOf('call_off_order')).toEqual([]);
		expect(await jobsOf('move_slot_order')).toEqual([]);
	};

	test('when somebody has bought since, or saved the plan', async () => {
		const { digest } = await planner.look(version);
		await buy(shop, sold.id);
		const refusal = await refusalOf(
			planner.live(version, digest, [{ slotId: sold.id, choice: 'call_off' }])
		);
		expect(refusal.message).toContain('changed since you looked');
		const newer = await planner.look(version);
		await adminQuery(
			'update plan set revision = revision + 1 where operator_id = $1 and version = $2',
			[shop.operatorId, version]
		);
		expect((await refusalOf(planner.live(version, newer.digest))).message).toContain(
			'changed since'
		);
		expect(await planner.stateOf(version)).toBe('draft');
		expect(await readSlotRow(shop, sold.id)).toMatchObject({ status: 'open', sold: 2 });
	});

	test('when the numbers of other choices were seen', async () => {
		const { digest } = await planner.look(version);
		const chosen = [{ slotId: sold.id, choice: 'call_off' }];
		for (const seen of ['', seenOf([{ slotId: sold.id, choice: `move:${sold.id}` }])]) {
			const work = goLive(
				planner.asker(),
				{ slug: shop.site.slug, version },
				{ digest: digest!, seen, chosen, reason },
				new Date()
			);
			expect((await refusalOf(work)).message).toContain('Nothing is done yet');
		}
		await expectNothing();
	});

	test('when a slot is no conflict, or the target was not offered', async () => {
		const { digest } = await planner.look(version);
		const wrong: Chosen[] = [
			{ slotId: replan.inside[0]!.id, choice: 'call_off' },
			{ slotId: sold.id, choice: `move:${replan.outside[1]!.id}` },
			{ slotId: sold.id, choice: `move:${sold.id}` },
			{ slotId: sold.id, choice: `move:${shop.operatorId}` }
		];
		for (const one of wrong) {
			expect((await refusalOf(planner.live(version, digest, [one]))).kind).toBe('conflict');
		}
		await expectNothing();
	});

	test('when two slots together are too many for the one that both go to', async () => {
		const second = replan.outside[1]!;
		await buy(shop, second.id, { adults: 4 });
		const target = replan.inside.find(({ startsAt }) => startsAt > second.startsAt)!;
		await buy(shop, target.id, { adults: target.capacity - 4 });
		const { digest } = await planner.look(version);
		const refusal = await refusalOf(
			planner.live(version, digest, [
				{ slotId: sold.id, choice: `move:${target.id}` },
				{ slotId: second.id, choice: `move:${target.id}` }
			])
		);
		expect(refusal.message).toContain('too few places');
		await expectNothing();
	});

	test('when no reason is given to those who are moved or paid back', async () => {
		const { digest } = await planner.look(version);
		const chosen = [{ slotId: sold.id, choice: 'call_off' }];
		const work = goLive(
			planner.asker(),
			{ slug: shop.site.slug, version },
			{ digest: digest!, seen: seenOf(chosen), chosen, reason: '' },
			new Date()
		);
		expect(await refusalOf(work)).toMatchObject({ kind: 'invalid', field: 'reason' });
		await expectNothing();
	});

	test('for every role but planner and owner; and another operator learns nothing', async () => {
		const { digest } = await planner.look(version);
		const second = await makeMember(shop, 'planner');
		for (const role of roles.filter((one) => one !== 'owner' && one !== 'planner')) {
			const who = planner.asker(await makeMember(shop, role), role);
			const asked = { slug: shop.site.slug, version };
			expect((await refusalOf(lookAtConflicts(who, asked, new Date()))).kind, role).toBe(
				'forbidden'
			);
			const work = goLive(who, asked, planner.decisions(digest, []), new Date());
			expect((await refusalOf(work)).kind, role).toBe('forbidden');
			const deciding = decideConflicts(
				who,
				shop.site.slug,
				planner.decisions(digest, []),
				new Date()
			);
			expect((await refusalOf(deciding)).kind, role).toBe('forbidden');
		}
		await expectNothing();
		const other = await openShop();
		// Their site of the same name has no such version, and this one's slots are nowhere in theirs.
		const none = await refusalOf(plannerOf(other).look(version));
		expect([none.kind, none.message]).toEqual(['not_found', 'There is no such plan version.']);
		expect((await plannerOf(other).look(null)).undecided).toEqual([]);
		const theirs = plannerOf(other).decide((await plannerOf(other).look(null)).digest, [
			{ slotId: sold.id, choice: 'call_off' }
		]);
		expect((await refusalOf(theirs)).kind).toBe('conflict');
		await expectNothing();
		const done = await goLive(
			planner.asker(second, 'planner'),
			{ slug: shop.site.slug, version },
			planner.decisions(digest, [{ slotId: sold.id, choice: 'keep' }]),
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
	const { digest } = await planner.look(version);
	const chosen = [
		{ slotId: off.id, choice: 'call_off' },
		{ slotId: moved.id, choice: `move:${target.id}` }
	];
	const done = await Promise.allSettled([1, 2, 3].map(() => planner.live(version, digest, chosen)));
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
		const { digest } = await planner.look(version);
		const chosen = [{ slotId: one.id, choice: 'call_off' }];
		await emptyQueue();
		const go = [() => hold(shop, one.id), () => planner.live(version, digest, chosen)];
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
