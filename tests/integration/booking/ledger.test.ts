import { eq } from 'drizzle-orm';
import { beforeAll, expect, test } from 'vitest';
import { ledgerEntry } from '../../../src/lib/server/db/schema/index.ts';
import { ledgerBalance, syncLedger } from '../../../src/lib/server/payments/ledger.ts';
import { readBalance } from '../../../src/lib/server/payments/gateway/index.ts';
import { hold, openShop, payAtService, type Shop } from '../../support/shop.ts';

let shop: Shop;
beforeAll(async () => {
	shop = await openShop();
});

test('money that is booked before we know of its payment is put down to its order', async () => {
	const orderId = await hold(shop, shop.slots[0]!.id, { adults: 2 });
	// Paid at the service; neither the return page nor an event has reached us.
	await payAtService(shop, orderId);
	await syncLedger({ operatorId: shop.operatorId });
	const entries = await shop.asOwner((tx) =>
		tx.sql.query.ledgerEntry.findMany({ where: eq(ledgerEntry.operatorId, shop.operatorId) })
	);
	expect(entries.map(({ orderId: of, amountMinor }) => ({ of, amountMinor }))).toEqual([
		{ of: orderId, amountMinor: 3200 }
	]);
	expect(await shop.asOwner(ledgerBalance)).toEqual(await readBalance(shop.accountId));
});
