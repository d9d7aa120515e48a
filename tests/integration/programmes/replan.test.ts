import { eq } from 'drizzle-orm';
import { beforeAll, expect, test } from 'vitest';
import { plan, slot } from '../../../src/lib/server/db/schema/index.ts';
import { quarryPlan } from '../../../src/lib/server/demo/plans.ts';
import { demandProgramme, saveProgramme } from '../../../src/lib/server/programmes/programmes.ts';
import { previewProgramme, publishProgramme } from '../../../src/lib/server/programmes/publish.ts';
import {
	askForWindows,
	computeWindows,
	demandComputation
} from '../../../src/lib/server/sites/compute.ts';
import { addPlan, mergePlan, makeLive, savePlan } from '../../../src/lib/server/sites/plans.ts';
import { adminQuery } from '../../support/database.ts';
import { refusalOf } from '../../support/refusals.ts';
import { buy, hold, openShop, readSlotRow, type Shop } from '../../support/shop.ts';

let shop: Shop;
beforeAll(async () => {
	shop = await openShop();
});

const preview = () =>
	shop.asOwner((tx) => previewProgramme(tx, shop.site.slug, shop.site.programmeId, new Date()));
const publish = (digest: string) =>
	shop.asOwner((tx) =>
		publishProgramme(tx, shop.site.slug, shop.site.programmeId, digest, new Date())
	);

test('publishing what is published changes nothing', async () => {
	const { difference, digest } = await preview();
	expect(difference).toMatchObject({ added: [], removed: [], staying: [], blocked: [] });
	expect(difference!.kept).toHaveLength(shop.slots.length);
	expect(await publish(digest)).toEqual({ added: 0, removed: 0, kept: shop.slots.length });
});

test('what is published is what was looked at', async () => {
	const { digest } = await preview();
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
	expect((await refusalOf(publish(digest))).message).toContain('changed since you looked');
});

test('publishing again never touches sold or held slots', async () => {
	const sold = shop.slots[3]!;
	const held = shop.slots[5]!;
	await buy(shop, sold.id);
	await hold(shop, held.id);
	const { difference, digest } = await preview();
	const staying = difference!.staying.map((one) => one.slot.id);
	expect(staying).toEqual([sold.id, held.id]);
	expect(difference!.staying.every(({ outsideWindows }) => !outsideWindows)).toBe(true);
	await publish(digest);
	for (const one of [sold, held]) {
		const { startsAt, endsAt, status } = await readSlotRow(shop, one.id);
		expect({ startsAt, endsAt, status }).toEqual({
			startsAt: one.startsAt,
			endsAt: one.endsAt,
			status: 'open'
		});
	}
});

test('a version that was live never changes', async () => {
	const work = shop.asOwner((tx) =>
		tx.sql
			.update(plan)
			.set({ body: { ...quarryPlan, name: 'Changed' } })
			.where(eq(plan.siteId, shop.site.siteId))
	);
	await expect(work).rejects.toMatchObject({ cause: { constraint: 'plan_keep_live' } });
	const saving = shop.asOwner((tx) =>
		savePlan(tx, { slug: shop.site.slug, version: 1, revision: 1, body: quarryPlan })
	);
	expect((await refusalOf(saving)).kind).toBe('conflict');
});

test('two who edit one draft: the second is told, and nobody’s work is lost', async () => {
	const version = await shop.asOwner((tx) => addPlan(tx, shop.site.slug, quarryPlan));
	const save = (name: string) =>
		shop.asOwner((tx) =>
			savePlan(tx, {
				slug: shop.site.slug,
				version,
				revision: 1,
				body: { ...quarryPlan, name }
			})
		);
	const done = await Promise.allSettled([save('First'), save('Second')]);
	expect(done.filter(({ status }) => status === 'fulfilled')).toHaveLength(1);
	const refused = done.find(({ status }) => status === 'rejected') as PromiseRejectedResult;
	expect(refused.reason).toMatchObject({ kind: 'conflict' });
});

test('who is told may bring both together, and saves from there', async () => {
	const version = await shop.asOwner((tx) => addPlan(tx, shop.site.slug, quarryPlan));
	const theirs = { ...quarryPlan, skyline: [[0, 2]] as [number, number][] };
	const mine = { ...quarryPlan, rule: { ...quarryPlan.rule, minimumArc: 50 } };
	const at = { slug: shop.site.slug, version };
	await shop.asOwner((tx) => savePlan(tx, { ...at, revision: 1, body: theirs }));
	const refused = await refusalOf(
		shop.asOwner((tx) => savePlan(tx, { ...at, revision: 1, body: mine }))
	);
	expect(refused.message).toMatch(/^\S.* has saved this version since/);
	const merge = await shop.asOwner((tx) => mergePlan(tx, { ...at, base: quarryPlan, mine }));
	expect(merge).toMatchObject({ revision: 2, taken: 1, clashes: [], theirs });
	expect(merge.plan).toMatchObject({ skyline: [[0, 2]], rule: { minimumArc: 50 } });
	// Merging saved nothing yet; and while they save again, what was merged does not overwrite it.
	await shop.asOwner((tx) => savePlan(tx, { ...at, revision: 2, body: theirs }));
	const late = shop.asOwner((tx) =>
		savePlan(tx, { ...at, revision: merge.revision, body: merge.plan })
	);
	expect((await refusalOf(late)).kind).toBe('conflict');
});

test('a plan that takes the bow away shows its sold slots as conflicts and moves none', async () => {
	const version = await shop.asOwner((tx) =>
		// The only curtain left stands where the bow never falls on it.
		addPlan(tx, shop.site.slug, {
			...quarryPlan,
			curtains: [{ ...quarryPlan.curtains[0]!, from: [200, -6], to: [200, -5], top: 0.5 }]
		})
	);
	await shop.asOwner((tx) => makeLive(tx, shop.site.slug, version));
	expect((await preview()).difference).toBeNull();
	const { programme } = await shop.asOwner((tx) =>
		demandProgramme(tx, shop.site.siteId, shop.site.programmeId)
	);
	const id = await shop.asOwner((tx) =>
		askForWindows(tx, shop.site.siteId, { from: programme.seasonFrom, to: programme.seasonTo })
	);
	await Promise.all([
		computeWindows({ operatorId: shop.operatorId, computationId: id }, { number: 1, of: 1 }),
		computeWindows({ operatorId: shop.operatorId, computationId: id }, { number: 1, of: 1 })
	]);
	expect((await shop.asOwner((tx) => demandComputation(tx, id))).state).toBe('done');
	const before = await readSlotRow(shop, shop.slots[3]!.id);
	const { difference, digest } = await preview();
	expect(difference!.added).toEqual([]);
	expect(difference!.staying).toHaveLength(2);
	expect(difference!.staying.every(({ outsideWindows }) => outsideWindows)).toBe(true);
	await publish(digest);
	expect(await readSlotRow(shop, shop.slots[3]!.id)).toEqual(before);
	const left = await shop.asOwner((tx) =>
		tx.sql.query.slot.findMany({ where: eq(slot.operatorId, shop.operatorId) })
	);
	expect(left.filter(({ status }) => status === 'open')).toHaveLength(2);
});

test('the same windows are computed once, though asked for twice', async () => {
	const range = { from: '2027-03-01', to: '2027-03-20' };
	const ask = () => shop.asOwner((tx) => askForWindows(tx, shop.site.siteId, range));
	const [first, second] = await Promise.all([ask(), ask()]);
	expect(second).toBe(first);
	const twice = await adminQuery(
		`select zone_id, starts_at from bow_window where operator_id = $1
			group by computation_id, zone_id, starts_at having count(*) > 1`,
		[shop.operatorId]
	);
	expect(twice).toEqual([]);
});
