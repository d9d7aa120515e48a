import { and, eq, gt } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { checkoutAddress } from '../../src/lib/server/booking/checkout.ts';
import { reservePlaces } from '../../src/lib/server/booking/reserve.ts';
import { settleOrder } from '../../src/lib/server/booking/settle.ts';
import { listPrices } from '../../src/lib/server/booking/slots-for-sale.ts';
import { order, slot } from '../../src/lib/server/db/schema/index.ts';
import { inTenant, type TenantTx } from '../../src/lib/server/db/transaction.ts';
import { askDouble } from '../../src/lib/server/demo/orders.ts';
import { quarryPlan } from '../../src/lib/server/demo/plans.ts';
import { makeDemoSite, publishDemoProgramme } from '../../src/lib/server/demo/sites.ts';
import {
	changeSeller,
	openPaymentAccount,
	readPaymentAccount,
	refreshAccount
} from '../../src/lib/server/payments/accounts.ts';
import { adminQuery } from './database.ts';
import { makeOperator, newAddress, type Operator } from './people.ts';

export const GOOD_CARD = '4242424242424242';

/** An operator that sells: seller entered, account complete, one site with published slots. */
export interface Shop extends Operator {
	accountId: string;
	site: { slug: string; siteId: string; programmeId: string };
	/** Coming slots that are open, in order of time. */
	slots: (typeof slot.$inferSelect)[];
	/** Runs as the owner. */
	asOwner: <T>(run: (tx: TenantTx) => Promise<T>) => Promise<T>;
	asVisitor: <T>(run: (tx: TenantTx) => Promise<T>) => Promise<T>;
}

/** Opens a shop by the services that the screens use. */
export async function openShop({ capacity = 12 } = {}): Promise<Shop> {
	const operator = await makeOperator();
	const { operatorId, owner } = operator;
	const actor = { kind: 'member', role: 'owner', userId: owner.userId, name: owner.name } as const;
	const origin = { actor, requestId: 'test' };
	const asOwner = <T>(run: (tx: TenantTx) => Promise<T>) => inTenant(operatorId, origin, run);
	await asOwner((tx) =>
		changeSeller(tx, {
			name: 'Test Mist Gardens',
			street: '1 Test Lane',
			postcode: '1000',
			city: 'Testing',
			country: 'AT',
			taxId: null,
			email: 'office@example.org'
		})
	);
	await openPaymentAccount(operatorId, origin);
	const account = await asOwner(readPaymentAccount);
	await askDouble(`accounts/${account!.accountId}/complete`, {});
	await refreshAccount(operatorId, origin);
	const now = new Date();
	const site = await makeDemoSite(
		operatorId,
		origin,
		{
			plan: quarryPlan,
			currency: 'EUR',
			description: 'A test site.',
			arrival: '',
			capacity,
			prices: [
				{ name: 'Adult', amountMinor: 1600, taxPercent: '10' },
				{ name: 'Child', amountMinor: 650, taxPercent: '20' }
			]
		},
		now
	);
	await publishDemoProgramme(operatorId, origin, site, now);
	const slots = await asOwner((tx) =>
		tx.sql.query.slot.findMany({
			where: and(eq(slot.operatorId, operatorId), gt(slot.startsAt, now)),
			orderBy: slot.startsAt
		})
	);
	const visitor = { actor: { kind: 'visitor', name: 'test visitor' }, requestId: 'test' } as const;
	return {
		...operator,
		accountId: account!.accountId,
		site,
		slots,
		asOwner,
		asVisitor: (run) => inTenant(operatorId, visitor, run)
	};
}

export interface Wish {
	adults?: number;
	children?: number;
	email?: string;
	now?: Date;
}

/** Holds places; the payment is still to come. @returns the order's id */
export async function hold(
	shop: Shop,
	slotId: string,
	{ adults = 1, children = 0, email = newAddress(), now = new Date() }: Wish = {}
): Promise<string> {
	const orderId = uuidv7();
	await shop.asVisitor(async (tx) => {
		const [adult, child] = await listPrices(tx, shop.site.programmeId);
		await reservePlaces(
			tx,
			{
				orderId,
				slotId,
				visitorName: 'Vera Visitor',
				visitorEmail: email,
				quantities: [
					{ priceCategoryId: adult!.id, quantity: adults },
					{ priceCategoryId: child!.id, quantity: children }
				]
			},
			now
		);
	});
	return orderId;
}

/** Opens the payable page of an order. @returns the session's name at the service */
export async function openCheckoutOf(shop: Shop, orderId: string): Promise<string> {
	const origin = { actor: { kind: 'visitor', name: 'test' } } as const;
	const address = await checkoutAddress(shop.operatorId, orderId, origin, new Date());
	const session = /cs_[A-Za-z0-9_]+/.exec(address ?? '')?.[0];
	if (!session) throw new Error(`no session in ${address}`);
	return session;
}

/** Pays at the service and tells nobody: the return page or an event still has to. */
export async function payAtService(shop: Shop, orderId: string, card = GOOD_CARD): Promise<string> {
	const session = await openCheckoutOf(shop, orderId);
	await askDouble(`checkout/${session}/pay`, { card });
	return session;
}

/** A paid order with its tickets. @returns its id */
export async function buy(shop: Shop, slotId: string, wish: Wish & { card?: string } = {}) {
	const orderId = await hold(shop, slotId, wish);
	await payAtService(shop, orderId, wish.card);
	await settleOrder(shop.operatorId, orderId, 'return');
	return orderId;
}

export async function readOrderRow(shop: Shop, orderId: string) {
	const found = await shop.asOwner((tx) =>
		tx.sql.query.order.findFirst({ where: eq(order.id, orderId) })
	);
	if (!found) throw new Error('no such order');
	return found;
}

export async function readSlotRow(shop: Shop, slotId: string) {
	const found = await shop.asOwner((tx) =>
		tx.sql.query.slot.findFirst({ where: eq(slot.id, slotId) })
	);
	if (!found) throw new Error('no such slot');
	return found;
}

/** Lets the hold of an order lapse: as if its minutes had passed. */
export async function lapse(orderId: string): Promise<void> {
	await adminQuery(`update "order" set hold_until = now() - interval '1 second' where id = $1`, [
		orderId
	]);
}

/** What the payment double holds of an account: charges and refunds as they are there. */
export async function atService(shop: Shop) {
	const base = process.env.PAYMENT_API_URL;
	const headers = {
		authorization: `Bearer ${process.env.PAYMENT_SECRET_KEY}`,
		'stripe-account': shop.accountId
	};
	const list = async <T>(what: string) => {
		const answer = await fetch(`${base}/v1/${what}?limit=100`, { headers });
		return ((await answer.json()) as { data: T[] }).data;
	};
	return {
		charges: await list<{ id: string; amount: number; amount_refunded: number; status: string }>(
			'charges'
		),
		refunds: await list<{ id: string; amount: number; metadata: Record<string, string> }>(
			'refunds'
		),
		sessions: await list<{ id: string; status: string; client_reference_id: string }>(
			'checkout/sessions'
		)
	};
}

/** Lays faults in wait at the payment double. */
export async function layFaults(
	...faults: { match: string; fault: string; times: number; ms?: number }[]
) {
	await askDouble('faults', faults);
}

/** Lets the payment double work as it should again. */
export async function clearFaults(): Promise<void> {
	await fetch(`${process.env.PAYMENT_API_URL}/_double/faults`, { method: 'DELETE' });
}
