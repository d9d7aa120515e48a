import { beforeAll, expect, test } from 'vitest';
import {
	addWaterEntry,
	listWater,
	remindOperator,
	waterWarnings
} from '../../../src/lib/server/sites/water.ts';
import { waterEntry } from '../../../src/lib/server/db/schema/index.ts';
import { lettersTo } from '../../support/letters.ts';
import { makeMember } from '../../support/people.ts';
import { refusalOf } from '../../support/refusals.ts';
import { openShop, type Shop } from '../../support/shop.ts';

let shop: Shop;
beforeAll(async () => {
	shop = await openShop();
});

const now = new Date('2027-05-10T10:00:00Z');
const note = (kind: 'disinfection' | 'sample', doneOn: string, nextDueOn: string | null) =>
	shop.asOwner((tx) =>
		addWaterEntry(tx, shop.site.slug, { kind, doneOn, nextDueOn, note: '' }, now)
	);
const warnings = (today: string) =>
	shop.asOwner((tx) => waterWarnings(tx, shop.site.siteId, today));

test('a log that lacks something or is overdue warns, and the newest entry counts', async () => {
	expect(await warnings('2027-05-10')).toHaveLength(2);
	await note('disinfection', '2027-04-01', '2027-05-01');
	await note('sample', '2027-05-01', null);
	expect(await warnings('2027-05-10')).toEqual([
		'Disinfection of the water was due on 1 May 2027.'
	]);
	expect(await warnings('2027-05-01')).toEqual([]);
	await note('disinfection', '2027-05-09', '2027-05-12');
	expect(await warnings('2027-05-10')).toEqual([]);
});

test('what is due soon is told to owners and planners, once', async () => {
	const planner = await makeMember(shop, 'planner');
	const steward = await makeMember(shop, 'steward');
	const remind = () => shop.asOwner((tx) => remindOperator(tx, now));
	await Promise.all([remind(), remind()]);
	await remind();
	for (const person of [planner, shop.owner]) {
		const letters = (await lettersTo(person.email)).filter(({ kind }) => kind === 'water_due');
		expect(letters).toHaveLength(1);
		expect(letters[0]!.text).toContain('Disinfection: 12 May 2027');
	}
	expect((await lettersTo(steward.email)).some(({ kind }) => kind === 'water_due')).toBe(false);
});

test('the log takes no future, no backward dates, and never changes', async () => {
	expect((await refusalOf(note('sample', '2027-05-11', null))).field).toBe('doneOn');
	expect((await refusalOf(note('sample', '2027-05-01', '2027-04-01'))).field).toBe('nextDueOn');
	const before = await shop.asOwner((tx) => listWater(tx, shop.site.siteId));
	for (const work of [
		() => shop.asOwner((tx) => tx.sql.update(waterEntry).set({ doneOn: '2027-01-01' })),
		() => shop.asOwner((tx) => tx.sql.delete(waterEntry))
	]) {
		await expect(work()).rejects.toMatchObject({ cause: { code: '42501' } });
	}
	expect(await shop.asOwner((tx) => listWater(tx, shop.site.siteId))).toEqual(before);
});
