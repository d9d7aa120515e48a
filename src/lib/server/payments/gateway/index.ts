/**
 * The one folder that knows the payment service's SDK. Everything it answers is in our own types, and it
 * is never called inside a transaction.
 */
export { PaymentRefused } from './client';
export {
	endCheckout,
	openCheckout,
	readCheckout,
	type Checkout,
	type CheckoutOrder,
	type ReceivedPayment
} from './checkout';
export { readRefund, sendRefund, type ServiceRefund } from './refunds';
export { balanceTransactions, readBalance, type BalanceTransaction } from './balance';
export { accountLink, openAccount, readAccount } from './accounts';
export { verifyEvent, type ServiceEvent } from './events';
