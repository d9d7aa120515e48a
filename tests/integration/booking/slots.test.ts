import { and, eq } from 'drizzle-orm';
import { beforeAll, describe, expect, test } from 'vitest';
import { violates } from '../../../src/lib/server/db/errors.ts';
import { bowWindow, slot } from '../../../src/lib/server/db/schema/index.ts';
import { adminQuery } from '../../support/database.ts';
import { refusalOf } from '../../support/refusals.ts';
import { buy, hold, openShop, readSlotRow, type Shop } from '../../support/shop.ts';

let shop: Shop;
beforeAll(async () => {
	shop = await openShop();
});

async function violatedBy(work: Promise<unknown>, constraint: string): Promise<void> {
	await expect(
		work.then(
			() => 'nothing',
			(error: unknown) => violates(error, constraint)
		)
	).resolves.toBe(true);
}

const minutes = (n: number) => n * 60_000;

describe('a slot lies inside a window', () => {
	const fresh = (change: Partial<typeof slot.$inferInsert>) =>
		shop.asOwner(async (tx) => {
			const { id: _, createdAt: __, held: ___, sold: ____, ...like } = shop.slots[0]!;
			await tx.sql.insert(slot).values({ ...like, ...change });
		});

	test('the database refuses one that begins before it', async () => {
		const { windowStartsAt } = shop.slots[0]!;
		const startsAt = new Date(windowStartsAt.getTime() - 1000);
		const endsAt = new Date(windowStartsAt.getTime() - 500);
		await violatedBy(fresh({ startsAt, endsAt }), 'slot_inside_window');
	});

	test('the database refuses one that ends after it', async () => {
		const { windowEndsAt } = shop.slots[0]!;
		const startsAt = new Date(windowEndsAt.getTime() - 1000);
		const endsAt = new Date(windowEndsAt.getTime() + 1000);
		await violatedBy(fresh({ startsAt, endsAt }), 'slot_inside_window');
	});

	test('the database refuses one that says its window is longer than it is', async () => {
		const { windowEndsAt } = shop.slots[0]!;
		const longer = new Date(windowEndsAt.getTime() + minutes(60));
		await violatedBy(
			fresh({ windowEndsAt: longer, startsAt: windowEndsAt, endsAt: longer }),
			'slot_window_fk'
		);
	});

	test('nobody can lengthen a stored window', async () => {
		const work = shop.asOwner((tx) =>
			tx.sql
				.update(bowWindow)
				.set({ endsAt: new Date('2100-01-01') })
				.where(eq(bowWindow.id, shop.slots[0]!.windowId))
		);
		await expect(work).rejects.toMatchObject({ cause: { code: '42501' } });
	});

	test('every slot of a published season lies in a window of its zone', async () => {
		const outside = await adminQuery(
			`select s.id from slot s where s.operator_id = $1 and not exists (
				select 1 from bow_window w where w.operator_id = s.operator_id and w.zone_id = s.zone_id
					and w.starts_at <= s.starts_at and s.ends_at <= w.ends_at)`,
			[shop.operatorId]
		);
		expect(outside).toEqual([]);
		expect(shop.slots.length).toBeGreaterThan(20);
	});
});

describe('slots of a zone never overlap', () => {
	test('two that are written at once: one is refused', async () => {
		const like = shop.slots[4]!;
		await shop.asOwner((tx) => tx.sql.delete(slot).where(eq(slot.id, like.id)));
		const write = (shiftMs: number) =>
			shop.asOwner(async (tx) => {
				const { id: _, ...row } = like;
				await tx.sql.insert(slot).values({
					...row,
					startsAt: new Date(row.startsAt.getTime() + shiftMs),
					endsAt: new Date(row.endsAt.getTime() + shiftMs)
				});
			});
		const done = await Promise.allSettled([write(0), write(minutes(5)), write(minutes(-5))]);
		expect(done.filter(({ status }) => status === 'fulfilled')).toHaveLength(1);
		for (const one of done) {
			if (one.status === 'rejected') expect(violates(one.reason, 'slot_no_overlap')).toBe(true);
		}
	});

	test('one may stand where another was called off', async () => {
		const like = shop.slots[6]!;
		await shop.asOwner(async (tx) => {
			await tx.sql.update(slot).set({ status: 'called_off' }).where(eq(slot.id, like.id));
			const { id: _, ...row } = like;
			await tx.sql.insert(slot).values(row);
		});
		await violatedBy(
			shop.asOwner((tx) => tx.sql.update(slot).set({ status: 'open' }).where(eq(slot.id, like.id))),
			'slot_keep_called_off'
		);
	});
});

describe('places', () => {
	test('many buyers at once for the last places: never one too many', async () => {
		const { id, capacity } = shop.slots[8]!;
		const wishes = Array.from({ length: 40 }, (_, i) => ({ adults: (i % 3) + 1 }));
		const done = await Promise.allSettled(wishes.map((wish) => hold(shop, id, wish)));
		const got = done.reduce(
			(sum, one, i) => sum + (one.status === 'fulfilled' ? wishes[i]!.adults : 0),
			0
		);
		const row = await readSlotRow(shop, id);
		expect(row.held).toBe(got);
		expect(row.held).toBeLessThanOrEqual(capacity);
		// Nobody is turned away while there is room for one.
		expect(row.held).toBe(capacity);
		for (const one of done) {
			if (one.status === 'rejected') expect(one.reason).toMatchObject({ kind: 'conflict' });
		}
	});

	test('the counters of a slot are what its orders say, and nothing can set them above its capacity', async () => {
		const { id } = shop.slots[9]!;
		await buy(shop, id, { adults: 3, children: 2 });
		await hold(shop, id, { adults: 4 });
		expect(await readSlotRow(shop, id)).toMatchObject({ sold: 5, held: 4 });
		await violatedBy(
			shop.asOwner((tx) => tx.sql.update(slot).set({ capacity: 8 }).where(eq(slot.id, id))),
			'slot_places'
		);
		const refusal = await refusalOf(hold(shop, id, { adults: 4 }));
		expect(refusal.message).toContain('3 places left');
	});

	test('a paused or called-off slot takes no order, nor does one that has begun', async () => {
		const { id, startsAt } = shop.slots[10]!;
		const now = new Date(startsAt.getTime() + 1000);
		expect((await refusalOf(hold(shop, id, { now }))).kind).toBe('conflict');
		for (const status of ['paused', 'called_off'] as const) {
			await shop.asOwner((tx) =>
				tx.sql
					.update(slot)
					.set({ status })
					.where(and(eq(slot.operatorId, shop.operatorId), eq(slot.id, id)))
			);
			expect((await refusalOf(hold(shop, id))).message).toContain('no longer for sale');
		}
	});
});
