import { eq } from 'drizzle-orm';
import { beforeAll, expect, test } from 'vitest';
import { cancelByVisitor } from '../../../src/lib/server/booking/orders.ts';
import { groupedCode, readTicketCode } from '../../../src/lib/server/booking/codes.ts';
import { ticket } from '../../../src/lib/server/db/schema/index.ts';
import { admit, gateSlots } from '../../../src/lib/server/gate/gate.ts';
import { makeMember, asMember, type Person } from '../../support/people.ts';
import { refusalOf } from '../../support/refusals.ts';
import { buy, openShop, type Shop } from '../../support/shop.ts';

let shop: Shop;
let steward: Person;
beforeAll(async () => {
	shop = await openShop();
	steward = await makeMember(shop, 'steward');
});

const codesOf = async (orderId: string) =>
	(
		await shop.asOwner((tx) => tx.sql.query.ticket.findMany({ where: eq(ticket.orderId, orderId) }))
	).map(({ code }) => code);
const check = (slotId: string, typed: string, now = new Date()) =>
	asMember(shop, steward, 'steward', (tx) => admit(tx, { slotId, typed }, now));

test('a ticket lets in once; the second time the first time is told', async () => {
	const { id } = shop.slots[0]!;
	const [code] = await codesOf(await buy(shop, id));
	const at = new Date('2027-01-01T10:00:00Z');
	expect(await check(id, groupedCode(code!).toLowerCase(), at)).toEqual({
		answer: 'let_in',
		name: 'Adult'
	});
	expect(await check(id, code!)).toEqual({ answer: 'used', name: 'Adult', usedAt: at });
});

test('two gates at once: one lets in', async () => {
	const { id } = shop.slots[1]!;
	const [code] = await codesOf(await buy(shop, id));
	const told = await Promise.all(Array.from({ length: 8 }, () => check(id, code!)));
	expect(told.filter(({ answer }) => answer === 'let_in')).toHaveLength(1);
	expect(told.filter(({ answer }) => answer === 'used')).toHaveLength(7);
});

test('a ticket for another slot is told and not marked', async () => {
	const [here, there] = [shop.slots[2]!, shop.slots[3]!];
	const [code] = await codesOf(await buy(shop, there.id));
	expect(await check(here.id, code!)).toMatchObject({
		answer: 'other_slot',
		startsAt: there.startsAt
	});
	expect(await check(there.id, code!)).toMatchObject({ answer: 'let_in' });
});

test('a cancelled ticket and a made-up code are told apart from good ones', async () => {
	const one = shop.slots.at(-1)!;
	const orderId = await buy(shop, one.id);
	const [code] = await codesOf(orderId);
	await shop.asVisitor((tx) => cancelByVisitor(tx, orderId, new Date()));
	expect(await check(one.id, code!)).toEqual({ answer: 'void', calledOff: false });
	for (const made of ['ABCD-EFGH-JKMN-PQRS', '', '  ', '<script>', 'A'.repeat(5000)]) {
		expect(await check(one.id, made)).toEqual({ answer: 'unknown' });
	}
});

test('a ticket of another operator is unknown here', async () => {
	const other = await openShop();
	const [code] = (await other.asOwner((tx) => tx.sql.query.ticket.findMany({}))).map(
		(row) => row.code
	);
	expect(code).toBeUndefined();
	const orderId = await buy(other, other.slots[0]!.id);
	const [theirs] = await other.asOwner((tx) =>
		tx.sql.query.ticket.findMany({ where: eq(ticket.orderId, orderId) })
	);
	expect(await check(shop.slots[0]!.id, theirs!.code)).toEqual({ answer: 'unknown' });
	const refusal = await refusalOf(check(other.slots[0]!.id, theirs!.code));
	expect(refusal.kind).toBe('not_found');
});

test('a bookkeeper does not work the gate, and a steward sees no money there', async () => {
	const bookkeeper = await makeMember(shop, 'bookkeeper');
	const refusal = await refusalOf(
		asMember(shop, bookkeeper, 'bookkeeper', (tx) => gateSlots(tx, new Date()))
	);
	expect(refusal.kind).toBe('forbidden');
	const now = new Date(shop.slots[0]!.startsAt.getTime() - 60_000);
	const seen = await asMember(shop, steward, 'steward', (tx) => gateSlots(tx, now));
	expect(seen.length).toBeGreaterThan(0);
	expect(JSON.stringify(seen)).not.toMatch(/minor|email|"EUR"/i);
});

test('codes are read as people type them', () => {
	expect(readTicketCode(' abcd-efgh jkmn-pqrs ')).toBe('ABCDEFGHJKMNPQRS');
	expect(readTicketCode('ABCDEFGHJKMNPQR0')).toBeNull();
	expect(readTicketCode('ABCD')).toBeNull();
});
