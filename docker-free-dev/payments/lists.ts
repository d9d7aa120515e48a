import type Stripe from 'stripe';
import { invalid, missingResource } from './errors.ts';
import type { Kind, Kinds, Row } from './store.ts';

interface ListParams extends Stripe.PaginationParams {
	created?: Stripe.RangeQueryParam | number;
}

/**
 * One page of a list, newest first, from `starting_after` on or up to `ending_before`.
 * @throws ApiError when a cursor is unknown or the limit is out of bounds.
 */
export function page<K extends Kind>(
	rows: Row<K>[],
	params: ListParams,
	url: string,
	createdOf: (value: Kinds[K]) => number
): Stripe.ApiList<Kinds[K]> {
	const limit = params.limit ?? 10;
	if (limit > 100) {
		throw invalid('This value must be less than or equal to 100.', {
			param: 'limit',
			code: 'parameter_invalid_integer'
		});
	}
	const fitting = rows.filter((row) => isWithin(createdOf(row.value), params.created));
	const position = (id: string, param: string) => {
		const index = fitting.findIndex((row) => row.id === id);
		if (index < 0) throw missingResource('object', id, param);
		return index;
	};
	if (params.ending_before !== undefined) {
		const end = position(params.ending_before, 'ending_before');
		const start = Math.max(0, end - limit);
		return listOf(fitting.slice(start, end), start > 0, url);
	}
	const start =
		params.starting_after === undefined ? 0 : position(params.starting_after, 'starting_after') + 1;
	return listOf(fitting.slice(start, start + limit), start + limit < fitting.length, url);
}

function listOf<K extends Kind>(
	rows: Row<K>[],
	hasMore: boolean,
	url: string
): Stripe.ApiList<Kinds[K]> {
	return { object: 'list', data: rows.map((row) => row.value), has_more: hasMore, url };
}

function isWithin(moment: number, bounds: ListParams['created']): boolean {
	if (bounds === undefined) return true;
	if (typeof bounds === 'number') return moment === bounds;
	return (
		(bounds.gt === undefined || moment > bounds.gt) &&
		(bounds.gte === undefined || moment >= bounds.gte) &&
		(bounds.lt === undefined || moment < bounds.lt) &&
		(bounds.lte === undefined || moment <= bounds.lte)
	);
}
