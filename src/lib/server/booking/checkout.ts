import { and, eq, isNull } from 'drizzle-orm';
import { order, orderLine } from '../db/schema';
import { inTenant, type Origin } from '../db/transaction';
import { env } from '../env';
import { Refusal } from '../failures';
import { readOperator } from '../operators/operators';
import { readPaymentAccount } from '../payments/accounts';
import { openCheckout } from '../payments/gateway';
import { visitorPath } from './visitor-key';

/** The service wants a session to stay open for half an hour from its making; holds end it earlier. */
const sessionMinutes = 31;

/**
 * Where a pending order is paid. Made after the order's own transaction, and with a key made from the
 * order: asked again (a reload, a lost answer) it is the same session.
 * @returns the address of the payable page; null when the order is not waiting for money
 */
export async function checkoutAddress(
	operatorId: string,
	orderId: string,
	origin: Origin,
	now: Date
): Promise<string | null> {
	const { found, lines, account, operator } = await inTenant(operatorId, origin, async (tx) => ({
		found: await tx.sql.query.order.findFirst({
			where: and(eq(order.operatorId, operatorId), eq(order.id, orderId))
		}),
		lines: await tx.sql.query.orderLine.findMany({
			where: and(eq(orderLine.operatorId, operatorId), eq(orderLine.orderId, orderId)),
			orderBy: orderLine.id
		}),
		account: await readPaymentAccount(tx),
		operator: await readOperator(tx)
	}));
	if (!found || found.status !== 'pending' || found.holdUntil <= now) return null;
	if (found.checkoutUrl) return found.checkoutUrl;
	if (!account) throw new Refusal('conflict', 'This operator can not take payments yet.');
	const { sessionId, url } = await openCheckout({
		accountId: account.accountId,
		operatorId,
		orderId,
		reference: found.reference,
		email: found.visitorEmail,
		currency: found.currency,
		lines: lines.filter((line) => line.grossMinor > 0),
		applicationFeeMinor: Math.floor((found.totalMinor * account.platformFeeBasisPoints) / 10_000),
		// Counted from the hold's end, before which it is made, and not from now: the same request must be
		// the same at every try.
		closesAt: new Date(found.holdUntil.getTime() + sessionMinutes * 60_000),
		returnUrl: env().ORIGIN + visitorPath(operator, orderId)
	});
	await inTenant(operatorId, origin, (tx) =>
		tx.sql
			.update(order)
			.set({ checkoutSessionId: sessionId, checkoutUrl: url })
			.where(and(eq(order.id, orderId), isNull(order.checkoutUrl)))
	);
	return url;
}
