import { eq } from 'drizzle-orm';
import { expect, test } from 'vitest';
import { bowWindow, slot } from '../../../src/lib/server/db/schema/index.ts';
import { quarryPlan } from '../../../src/lib/server/demo/plans.ts';
import { makeDemoSite, publishDemoProgramme } from '../../../src/lib/server/demo/sites.ts';
import { localClock } from '../../../src/lib/schedule/index.ts';
import { openShop } from '../../support/shop.ts';

test('slots over the days on which the clock changes stay at the sun’s right moment', async () => {
	const shop = await openShop();
	const actor = {
		kind: 'member',
		role: 'owner',
		userId: shop.owner.userId,
		name: shop.owner.name
	} as const;
	const origin = { actor, requestId: 'test' };
	// Europe/Paris goes from UTC+1 to UTC+2 on 28 March 2027, 01:00 UTC.
	const now = new Date('2027-03-25T12:00:00Z');
	const site = await makeDemoSite(
		shop.operatorId,
		origin,
		{
			plan: { ...quarryPlan, name: 'Clock yard' },
			currency: 'EUR',
			description: '',
			arrival: '',
			capacity: 5,
			prices: [{ name: 'Adult', amountMinor: 1000, taxPercent: '10' }]
		},
		now
	);
	await publishDemoProgramme(shop.operatorId, origin, site, now);
	const rows = await shop.asOwner((tx) =>
		tx.sql
			.select({
				localDate: slot.localDate,
				startsAt: slot.startsAt,
				windowStartsAt: bowWindow.startsAt,
				windowEndsAt: bowWindow.endsAt
			})
			.from(slot)
			.innerJoin(bowWindow, eq(bowWindow.id, slot.windowId))
			.where(eq(slot.siteId, site.siteId))
			.orderBy(slot.startsAt)
	);
	const firstOf = (date: string) => rows.find(({ localDate }) => localDate === date)!;
	const utcMinutes = (at: Date) => at.getUTCHours() * 60 + at.getUTCMinutes();
	const [before, after] = [firstOf('2027-03-27'), firstOf('2027-03-29')];
	// The sun knows of no clock: two days make minutes, not an hour.
	expect(Math.abs(utcMinutes(after.startsAt) - utcMinutes(before.startsAt))).toBeLessThanOrEqual(
		20
	);
	const clock = localClock('Europe/Paris');
	const wall = (at: Date) => utcMinutes(new Date(at.getTime() + clock.offsetMsAt(at.getTime())));
	expect(wall(after.startsAt) - wall(before.startsAt)).toBeGreaterThanOrEqual(40);
	for (const row of rows) {
		expect(row.startsAt >= row.windowStartsAt && row.startsAt < row.windowEndsAt).toBe(true);
		// The grid is that of the wall clock.
		expect(wall(row.startsAt) % 10).toBe(0);
	}
});
