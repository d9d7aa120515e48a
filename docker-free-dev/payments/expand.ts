import { invalid } from './errors.ts';
import type { Kind, Transaction } from './store.ts';

/** Which kind of row stands behind an id, by its prefix. */
const KIND_BY_PREFIX: Record<string, Kind> = {
	...{ acct: 'account', cs: 'session', pi: 'intent', ch: 'charge', re: 'refund', txn: 'balance' },
	...{ fee: 'fee', fr: 'feeRefund', dp: 'dispute' }
};
const DEEPEST = 4;

type Json = { [key: string]: unknown };

/**
 * Puts whole objects in the place of ids, along paths such as `payment_intent.latest_charge` or
 * `data.balance_transaction`. Works on a copy.
 * @throws ApiError when a path leads nowhere.
 */
export function expandBody(tx: Transaction, body: object, paths: string[]): object {
	if (paths.length === 0) return body;
	const copy = structuredClone(JSON.parse(JSON.stringify(body)) as Json);
	for (const path of paths) {
		const steps = path.split('.');
		const depth = steps[0] === 'data' ? steps.length - 1 : steps.length;
		if (depth > DEEPEST) {
			throw invalid(`You cannot expand more than ${DEEPEST} levels of a property (${path}).`, {
				param: 'expand'
			});
		}
		walk(tx, copy, steps, path);
	}
	return copy;
}

function walk(tx: Transaction, node: Json, steps: string[], path: string): void {
	const [step = '', ...rest] = steps;
	const value = step in node ? node[step] : included(tx, node, step);
	if (value === undefined) {
		throw invalid(`This property cannot be expanded (${path}).`, { param: 'expand' });
	}
	if (value === null) return;
	if (Array.isArray(value)) {
		value.forEach((item: unknown, index) => {
			const whole = typeof item === 'string' ? lookUp(tx, item, path) : (item as Json);
			value[index] = whole;
			if (rest.length > 0) walk(tx, whole, rest, path);
		});
		return;
	}
	const whole = typeof value === 'string' ? lookUp(tx, value, path) : value;
	if (typeof whole !== 'object') {
		throw invalid(`This property cannot be expanded (${path}).`, { param: 'expand' });
	}
	node[step] = whole;
	if (rest.length > 0) walk(tx, whole as Json, rest, path);
}

function lookUp(tx: Transaction, id: string, path: string): Json {
	const kind = KIND_BY_PREFIX[id.split('_')[0] ?? ''];
	const row = kind && tx.row(kind, id);
	if (!row) throw invalid(`This property cannot be expanded (${path}).`, { param: 'expand' });
	return JSON.parse(JSON.stringify(row.value)) as Json;
}

/** What an object shows only when asked: a session's line items, a charge's refunds. */
function included(tx: Transaction, node: Json, step: string): unknown {
	const id = String(node.id);
	if (node.object === 'checkout.session' && step === 'line_items') {
		const data = tx.row('terms', id)?.value.lineItems ?? [];
		const url = `/v1/checkout/sessions/${id}/line_items`;
		return { object: 'list', data, has_more: false, url };
	}
	if (node.object === 'charge' && step === 'refunds') {
		const data = tx.rows('refund').filter((row) => row.value.charge === id);
		const url = `/v1/charges/${id}/refunds`;
		return { object: 'list', data: data.map((row) => row.value), has_more: false, url };
	}
	return undefined;
}
