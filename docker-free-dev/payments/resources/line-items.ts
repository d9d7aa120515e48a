import Stripe from 'stripe';
import { seconds, type Call } from '../call.ts';
import { invalid, missingParameter } from '../errors.ts';
import { newId } from '../ids.ts';
import { mergeMetadata } from '../metadata.ts';

type LineParams = Stripe.Checkout.SessionCreateParams.LineItem;

/**
 * Makes a session's lines from prices given in place.
 * @throws ApiError when there is none, one lacks its price, or the currencies differ.
 */
export function makeLineItems(call: Call, lines: LineParams[]): Stripe.LineItem[] {
	if (lines.length === 0) throw missingParameter('line_items');
	const items = lines.map((line, index) => makeLineItem(call, line, `line_items[${index}]`));
	if (new Set(items.map((item) => item.currency)).size > 1) {
		throw invalid('All line items of a Checkout Session must have the same currency.', {
			param: 'line_items'
		});
	}
	return items;
}

function makeLineItem(call: Call, line: LineParams, at: string): Stripe.LineItem {
	if (line.price !== undefined) {
		throw invalid(`No such price: '${line.price}'`, {
			param: `${at}[price]`,
			code: 'resource_missing'
		});
	}
	const data = line.price_data;
	if (!data?.product_data) throw missingParameter(`${at}[price_data]`);
	const { currency } = data;
	const unitAmount = data.unit_amount ?? 0;
	const quantity = line.quantity ?? 1;
	const total = unitAmount * quantity;
	return {
		id: newId('li'),
		object: 'item',
		adjustable_quantity: null,
		amount_discount: 0,
		amount_subtotal: total,
		amount_tax: 0,
		amount_total: total,
		currency,
		description: data.product_data.name,
		metadata: mergeMetadata(null, line.metadata),
		price: {
			id: newId('price'),
			object: 'price',
			active: false,
			billing_scheme: 'per_unit',
			created: seconds(call),
			currency,
			custom_unit_amount: null,
			livemode: false,
			lookup_key: null,
			metadata: {},
			nickname: null,
			product: newId('prod', 14),
			recurring: null,
			tax_behavior: data.tax_behavior ?? 'unspecified',
			tiers_mode: null,
			transform_quantity: null,
			type: 'one_time',
			unit_amount: unitAmount,
			unit_amount_decimal: Stripe.Decimal.from(unitAmount)
		},
		quantity
	};
}
