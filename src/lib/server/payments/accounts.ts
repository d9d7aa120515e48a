import { eq } from 'drizzle-orm';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { paymentAccount, seller } from '../db/schema';
import type { Party } from '../db/schema/invoicing';
import { inTenant, type Origin, type TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import * as gateway from './gateway';

/** The operator's account at the payment service; null when none was opened. */
export async function readPaymentAccount(tx: TenantTx) {
	const found = await tx.sql.query.paymentAccount.findFirst({
		where: eq(paymentAccount.operatorId, tx.operatorId)
	});
	return found ?? null;
}

/** The operator as it stands on documents; null when it was not entered. */
export async function readSeller(tx: TenantTx): Promise<Party | null> {
	const found = await tx.sql.query.seller.findFirst({
		where: eq(seller.operatorId, tx.operatorId)
	});
	if (!found) return null;
	const { name, street, postcode, city, country, taxId, email } = found;
	return { name, street, postcode, city, country, taxId, email };
}

/** Enters or changes the operator as the seller; documents already issued keep what they say. */
export async function changeSeller(tx: TenantTx, party: Party): Promise<void> {
	demand(tx, 'money.settings');
	const before = await readSeller(tx);
	await tx.sql
		.insert(seller)
		.values({ operatorId: tx.operatorId, ...party })
		.onConflictDoUpdate({ target: seller.operatorId, set: party });
	await addToTrail(tx, {
		action: 'seller.changed',
		subject: { type: 'operator', id: tx.operatorId },
		...(before ? { before: { ...before } } : {}),
		after: { ...party }
	});
}

/** Why the operator can not sell yet, in words; empty when it can. */
export async function sellingObstacles(tx: TenantTx): Promise<string[]> {
	const obstacles: string[] = [];
	if (!(await readSeller(tx))) {
		obstacles.push('The seller’s name and address for receipts are missing.');
	}
	const account = await readPaymentAccount(tx);
	if (!account) obstacles.push('No account at the payment service is set up.');
	else if (!account.chargesEnabled) {
		obstacles.push('The account at the payment service is not complete.');
	}
	return obstacles;
}

/**
 * Opens the operator's account at the payment service; once, whatever the number of tries. The service
 * is asked between two transactions, never inside one.
 */
export async function openPaymentAccount(operatorId: string, origin: Origin): Promise<void> {
	const { account, party } = await inTenant(operatorId, origin, async (tx) => {
		demand(tx, 'money.settings');
		return { account: await readPaymentAccount(tx), party: await readSeller(tx) };
	});
	if (account) return;
	if (!party) throw new Refusal('conflict', 'Enter the seller’s name and address first.');
	const accountId = await gateway.openAccount({ operatorId, ...party });
	await inTenant(operatorId, origin, async (tx) => {
		const added = await tx.sql
			.insert(paymentAccount)
			.values({ operatorId, accountId })
			.onConflictDoNothing({ target: paymentAccount.operatorId })
			.returning();
		if (added.length === 0) return;
		await addToTrail(tx, {
			action: 'payment_account.opened',
			subject: { type: 'payment_account', id: accountId }
		});
	});
}

/** The page at the payment service on which the account is completed. @throws Refusal without one */
export async function onboardingAddress(
	operatorId: string,
	origin: Origin,
	returnUrl: string
): Promise<string> {
	const account = await inTenant(operatorId, origin, (tx) => {
		demand(tx, 'money.settings');
		return readPaymentAccount(tx);
	});
	if (!account) throw new Refusal('not_found', 'There is no account yet.');
	return gateway.accountLink(account.accountId, returnUrl);
}

/** Asks the service whether the account may take payments, and keeps the answer. */
export async function refreshAccount(operatorId: string, origin: Origin): Promise<void> {
	const account = await inTenant(operatorId, origin, readPaymentAccount);
	if (!account) return;
	const { chargesEnabled } = await gateway.readAccount(account.accountId);
	if (chargesEnabled === account.chargesEnabled) return;
	await inTenant(operatorId, origin, async (tx) => {
		await tx.sql
			.update(paymentAccount)
			.set({ chargesEnabled })
			.where(eq(paymentAccount.operatorId, operatorId));
		await addToTrail(tx, {
			action: 'payment_account.changed',
			subject: { type: 'payment_account', id: account.accountId },
			before: { chargesEnabled: account.chargesEnabled },
			after: { chargesEnabled }
		});
	});
}
