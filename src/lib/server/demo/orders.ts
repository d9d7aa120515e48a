import { v7 as uuidv7 } from 'uuid';
import { addDays, localClock } from '../../schedule';
import { checkoutAddress } from '../booking/checkout';
import { reservePlaces } from '../booking/reserve';
import { settleOrder } from '../booking/settle';
import { listPrices, listSlotsForSale, placesLeft } from '../booking/slots-for-sale';
import { inTenant, type Origin } from '../db/transaction';
import { env } from '../env';
import { callOff } from '../weather/call-off';

/** Invented visitors. */
const visitors = [
	['Ada Quill', 2, 1],
	['Benno Thorn', 2, 0],
	['Ciara Moss', 1, 2],
	['Dov Larch', 4, 0],
	['Elin Sallow', 2, 2],
	['Fenn Aldous', 1, 0],
	['Gita Rowan', 2, 1],
	['Hugo Penhal', 3, 0]
] as const;

const visitor = { actor: { kind: 'visitor', name: 'demo visitor' }, requestId: 'demo' } as const;

/** Buys places as a visitor would, the payable page's part done through the double's own helper. */
async function buy(
	operatorId: string,
	slot: { id: string; programmeId: string },
	[name, adults, children]: readonly [string, number, number],
	now: Date
): Promise<void> {
	const orderId = uuidv7();
	await inTenant(operatorId, visitor, async (tx) => {
		const prices = await listPrices(tx, slot.programmeId);
		const quantities = [adults, children].flatMap((quantity, i) =>
			prices[i] ? [{ priceCategoryId: prices[i].id, quantity }] : []
		);
		const visitorEmail = `${name.split(' ')[0]!.toLowerCase()}@visitors.example.org`;
		await reservePlaces(
			tx,
			{ orderId, slotId: slot.id, visitorName: name, visitorEmail, quantities },
			now
		);
	});
	const address = await checkoutAddress(operatorId, orderId, visitor, now);
	const session = /cs_[A-Za-z0-9_]+/.exec(address ?? '')?.[0];
	if (!session) throw new Error('the demo needs the payment double');
	await askDouble(`checkout/${session}/pay`, { card: '4242424242424242' });
	await settleOrder(operatorId, orderId, 'return', now);
}

/** One of the payment double's helpers; the real service has none of them. */
export async function askDouble(path: string, body: unknown): Promise<void> {
	const response = await fetch(`${env().PAYMENT_API_URL}/_double/${path}`, {
		method: 'POST',
		headers: { 'content-type': 'application/json' },
		body: JSON.stringify(body)
	});
	if (!response.ok) throw new Error(`the payment double answered ${response.status} to ${path}`);
}

/** Sells some of the coming slots and calls one off, so that each screen has something to show. */
export async function makeDemoOrders(
	operatorId: string,
	planner: Origin,
	{ siteId, timeZone }: { siteId: string; timeZone: string },
	now: Date
): Promise<void> {
	const until = addDays(localClock(timeZone).dateAt(now.getTime()), 6);
	const slots = await inTenant(operatorId, visitor, (tx) =>
		listSlotsForSale(tx, { siteId, now, until })
	);
	for (const [i, one] of visitors.entries()) {
		const slot = slots[(i * 3) % Math.min(slots.length, 14)];
		if (slot && placesLeft(slot) >= one[1] + one[2]) await buy(operatorId, slot, one, now);
	}
	const called = slots[3];
	if (!called) return;
	await buy(operatorId, called, visitors[0], now);
	await inTenant(operatorId, planner, (tx) =>
		callOff(
			tx,
			{
				slotIds: [called.id],
				reason: 'The forecast gives strong gusts at that hour, and the mist would not hold.'
			},
			now
		)
	);
}
