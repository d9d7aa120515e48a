import type { Route } from './call.ts';
import { accountRoutes } from './resources/accounts.ts';
import { balanceRoutes } from './resources/balance.ts';
import { chargeRoutes } from './resources/charges.ts';
import { disputeRoutes } from './resources/disputes.ts';
import { eventRoutes } from './resources/events.ts';
import { feeRoutes } from './resources/fees.ts';
import { intentRoutes } from './resources/intents.ts';
import { payRoutes } from './resources/pay.ts';
import { refundRoutes } from './resources/refunds.ts';
import { sessionRoutes } from './resources/sessions.ts';

/** Every address of the API that this double plays. */
export const routes: readonly Route[] = [
	...accountRoutes,
	...balanceRoutes,
	...chargeRoutes,
	...disputeRoutes,
	...eventRoutes,
	...feeRoutes,
	...intentRoutes,
	...payRoutes,
	...refundRoutes,
	...sessionRoutes
];
