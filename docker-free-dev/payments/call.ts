import type { Fields } from './params/fields.ts';
import type { Transaction } from './store.ts';

/** What a handler works with: one request, or one act of the double's own. */
export interface Call {
	tx: Transaction;
	/** The account acted for: the platform's own, or the one of the `Stripe-Account` header. */
	owner: string;
	/** The platform's own account. */
	platform: string;
	/** The double's own address, for pages. */
	base: string;
	apiVersion: string;
	requestId: string | null;
	idempotencyKey: string | null;
	/** The acts behind this call, by which faults for webhooks are matched. */
	causes: string[];
	nowMs: number;
	/** How long "later" is for refunds that fail and charges that are disputed. */
	laterMs: number;
}

/** The moment of a call in whole seconds, as the service writes time. */
export function seconds(call: Call): number {
	return Math.floor(call.nowMs / 1000);
}

/** What a handler answers with. */
export interface Outcome {
	status: number;
	body: object;
}

/** One address of the API. */
export interface Route {
	method: 'GET' | 'POST' | 'DELETE';
	/** Segments in braces take any text. */
	path: string;
	fields: Fields;
	run: (call: Call, params: unknown, ids: string[]) => Outcome;
}

/**
 * Makes a route whose handler gets its parameters in the SDK's type `T`; `fields` is the table that
 * checks them.
 */
export function route<T>(
	method: Route['method'],
	path: string,
	fields: Fields,
	run: (call: Call, params: T, ids: string[]) => object
): Route {
	return {
		method,
		path,
		fields,
		// The table has checked them, and `FieldsFor<T>` ties the table to the type.
		run: (call, params, ids) => ({ status: 200, body: run(call, params as T, ids) })
	};
}
