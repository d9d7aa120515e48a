import type Stripe from 'stripe';
import { route, seconds, type Call, type Route } from '../call.ts';
import { invalid, missingResource } from '../errors.ts';
import { newId } from '../ids.ts';
import { page } from '../lists.ts';
import { mergeMetadata } from '../metadata.ts';
import { checkChargeable } from '../money.ts';
import { SESSION_CREATE, SESSION_EXPIRE, SESSION_LIST } from '../params/session-tables.ts';
import { paging } from '../params/fields.ts';
import { RETRIEVE } from '../params/tables.ts';
import { refuseRestricted } from './accounts.ts';
import { emit } from './events.ts';
import { cancelIntent, checkFee, findIntent } from './intents.ts';
import { makeLineItems } from './line-items.ts';
import { schedule } from './tasks.ts';

const SHORTEST_S = 30 * 60;
const LONGEST_S = 24 * 60 * 60;

type CreateParams = Stripe.Checkout.SessionCreateParams;

function createSession(call: Call, params: CreateParams): Stripe.Checkout.Session {
	if (params.mode !== 'payment') {
		throw invalid('The payment double plays sessions of mode payment only.', { param: 'mode' });
	}
	refuseRestricted(call);
	const lineItems = makeLineItems(call, params.line_items ?? []);
	const currency = lineItems[0]?.currency ?? '';
	if (params.currency !== undefined && params.currency !== currency) {
		throw invalid('The currency must be the one of the line items.', { param: 'currency' });
	}
	const total = lineItems.reduce((sum, item) => sum + item.amount_total, 0);
	checkChargeable(total, currency, 'line_items');
	const payment = params.payment_intent_data ?? {};
	checkFee(
		call,
		payment.application_fee_amount,
		total,
		'payment_intent_data[application_fee_amount]'
	);
	const expiresAt = checkExpiry(call, params.expires_at);
	const id = newId('cs_test', 58);
	call.tx.put('terms', call.owner, id, { session: id, lineItems, payment });
	schedule(call, 'expire_session', id, expiresAt * 1000);
	return call.tx.put('session', call.owner, id, {
		...bareSession(call, params),
		id,
		amount_subtotal: total,
		amount_total: total,
		currency,
		expires_at: expiresAt,
		total_details: { amount_discount: 0, amount_shipping: 0, amount_tax: 0 },
		url: `${call.base}/pay/${id}`
	});
}

function checkExpiry(call: Call, wanted: number | undefined): number {
	const now = seconds(call);
	if (wanted === undefined) return now + LONGEST_S;
	const fault = (message: string) => invalid(message, { param: 'expires_at' });
	if (wanted < now + SHORTEST_S) {
		throw fault(
			'The `expires_at` timestamp must be at least 30 minutes from Checkout Session creation.'
		);
	}
	if (wanted > now + LONGEST_S) {
		throw fault(
			'The `expires_at` timestamp must be less than 24 hours from Checkout Session creation.'
		);
	}
	return wanted;
}

function bareSession(call: Call, params: CreateParams): Stripe.Checkout.Session {
	return {
		id: '',
		object: 'checkout.session',
		adaptive_pricing: { enabled: params.adaptive_pricing?.enabled ?? false },
		after_expiration: null,
		allow_promotion_codes: null,
		allowed_payment_method_types: params.allowed_payment_method_types ?? null,
		amount_subtotal: null,
		amount_total: null,
		automatic_tax: { enabled: false, liability: null, provider: null, status: null },
		billing_address_collection: params.billing_address_collection ?? null,
		cancel_url: params.cancel_url ?? null,
		client_reference_id: params.client_reference_id ?? null,
		client_secret: null,
		collected_information: null,
		consent: null,
		consent_collection: null,
		created: seconds(call),
		currency: null,
		currency_conversion: null,
		custom_fields: [],
		custom_text: {
			after_submit: null,
			shipping_address: null,
			submit: null,
			terms_of_service_acceptance: null
		},
		customer: null,
		customer_account: null,
		customer_creation: 'if_required',
		customer_details: null,
		customer_email: params.customer_email ?? null,
		discounts: [],
		expires_at: 0,
		integration_identifier: null,
		invoice: null,
		invoice_creation: null,
		livemode: false,
		locale: params.locale ?? null,
		managed_payments: null,
		metadata: mergeMetadata(null, params.metadata),
		mode: 'payment',
		origin_context: null,
		payment_intent: null,
		payment_link: null,
		payment_method_collection: 'if_required',
		payment_method_configuration_details: null,
		payment_method_options: {},
		payment_method_types: ['card'],
		payment_status: 'unpaid',
		permissions: null,
		phone_number_collection: { enabled: false },
		recovered_from: null,
		saved_payment_method_options: null,
		setup_intent: null,
		shipping_address_collection: null,
		shipping_cost: null,
		shipping_options: [],
		status: 'open',
		submit_type: params.submit_type ?? null,
		subscription: null,
		success_url: params.success_url ?? null,
		total_details: null,
		ui_mode: 'hosted_page',
		url: null,
		wallet_options: null
	};
}

/** @throws ApiError when this account has no such session. */
export function findSession(call: Call, id: string): Stripe.Checkout.Session {
	const session = call.tx.find('session', call.owner, id);
	if (!session) throw missingResource('checkout.session', id, 'session');
	return session;
}

/**
 * Ends an open session; a try to pay that it holds is cancelled with it.
 * @throws ApiError when it is not open.
 */
export function expireSession(
	call: Call,
	session: Stripe.Checkout.Session
): Stripe.Checkout.Session {
	if (session.status !== 'open') {
		throw invalid(
			'Only Checkout Sessions with a status in ["open"] can be expired. This Checkout Session has ' +
				`a status of ${session.status}.`
		);
	}
	const intentId = session.payment_intent;
	if (typeof intentId === 'string') cancelIntent(call, findIntent(call, intentId), 'automatic');
	const expired = call.tx.put('session', call.owner, session.id, {
		...session,
		status: 'expired',
		url: null
	});
	emit(call, 'checkout.session.expired', expired);
	return expired;
}

export const sessionRoutes: Route[] = [
	route<CreateParams>('POST', '/v1/checkout/sessions', SESSION_CREATE, createSession),
	route<Stripe.Checkout.SessionListParams>(
		'GET',
		'/v1/checkout/sessions',
		SESSION_LIST,
		(call, params) => {
			const rows = call.tx
				.rows('session', call.owner)
				.filter(
					({ value }) =>
						(params.status === undefined || value.status === params.status) &&
						(params.payment_intent === undefined ||
							value.payment_intent === params.payment_intent) &&
						(params.customer_details === undefined ||
							value.customer_details?.email === params.customer_details.email)
				);
			return page(rows, params, '/v1/checkout/sessions', (value) => value.created);
		}
	),
	route<object>('GET', '/v1/checkout/sessions/{session}', RETRIEVE, (call, _params, [id = '']) =>
		findSession(call, id)
	),
	route<object>(
		'POST',
		'/v1/checkout/sessions/{session}/expire',
		SESSION_EXPIRE,
		(call, _params, [id = '']) => expireSession(call, findSession(call, id))
	),
	route<object>(
		'GET',
		'/v1/checkout/sessions/{session}/line_items',
		paging,
		(call, _params, [id = '']) => {
			findSession(call, id);
			const data = call.tx.row('terms', id)?.value.lineItems ?? [];
			return {
				object: 'list',
				data,
				has_more: false,
				url: `/v1/checkout/sessions/${id}/line_items`
			};
		}
	)
];
