import type Stripe from 'stripe';
import {
	choice,
	created,
	currency,
	email,
	expand,
	flag,
	integer,
	list,
	metadata,
	notPlayed,
	object,
	paging,
	required,
	text,
	url,
	type FieldsFor
} from './fields.ts';

const PRODUCT_DATA = object({
	description: text(),
	images: list(url, 8),
	metadata,
	name: required(text()),
	tax_code: notPlayed,
	tax_details: notPlayed,
	unit_label: notPlayed
} satisfies FieldsFor<Stripe.Checkout.SessionCreateParams.LineItem.PriceData.ProductData>);

const PRICE_DATA = object({
	currency: required(currency),
	product: notPlayed,
	product_data: required(PRODUCT_DATA),
	recurring: notPlayed,
	tax_behavior: choice('exclusive', 'inclusive', 'unspecified'),
	unit_amount: required(integer()),
	unit_amount_decimal: notPlayed
} satisfies FieldsFor<Stripe.Checkout.SessionCreateParams.LineItem.PriceData>);

/** Amounts and names stood in the line itself in older versions of the API. */
const OLDER_LINE_ITEM = {
	amount: notPlayed,
	currency: notPlayed,
	description: notPlayed,
	dynamic_tax_rates: notPlayed,
	images: notPlayed,
	name: notPlayed
};

const LINE_ITEM = object({
	adjustable_quantity: notPlayed,
	...OLDER_LINE_ITEM,
	metadata,
	price: text(),
	price_data: PRICE_DATA,
	quantity: required(integer(1)),
	tax_rates: notPlayed
} satisfies FieldsFor<Stripe.Checkout.SessionCreateParams.LineItem>);

const PAYMENT_INTENT_DATA = object({
	application_fee_amount: integer(),
	capture_method: choice('automatic', 'automatic_async'),
	description: text(1000),
	metadata,
	on_behalf_of: notPlayed,
	receipt_email: email,
	setup_future_usage: notPlayed,
	shipping: notPlayed,
	statement_descriptor: text(22),
	statement_descriptor_suffix: text(22),
	transfer_data: notPlayed,
	transfer_group: notPlayed
} satisfies FieldsFor<Stripe.Checkout.SessionCreateParams.PaymentIntentData>);

/** Parameters that older versions of the API take. */
const OLDER_SESSION = { payment_method_types: list(choice('card')), shipping_rates: notPlayed };

export const SESSION_CREATE = {
	adaptive_pricing: object({ enabled: flag }),
	after_expiration: notPlayed,
	allow_promotion_codes: notPlayed,
	allowed_payment_method_types: list(choice('card')),
	automatic_tax: notPlayed,
	billing_address_collection: choice('auto'),
	branding_settings: notPlayed,
	cancel_url: url,
	client_reference_id: text(200),
	consent_collection: notPlayed,
	currency,
	custom_fields: notPlayed,
	custom_text: notPlayed,
	customer: notPlayed,
	customer_account: notPlayed,
	customer_creation: choice('if_required'),
	customer_email: email,
	customer_update: notPlayed,
	discounts: notPlayed,
	excluded_payment_method_types: notPlayed,
	expand,
	expires_at: integer(),
	integration_identifier: notPlayed,
	invoice_creation: notPlayed,
	line_items: required(list(LINE_ITEM, 100)),
	locale: text(10),
	managed_payments: notPlayed,
	metadata,
	mode: required(choice('payment', 'setup', 'subscription')),
	name_collection: notPlayed,
	optional_items: notPlayed,
	origin_context: notPlayed,
	payment_intent_data: PAYMENT_INTENT_DATA,
	payment_method_collection: notPlayed,
	payment_method_configuration: notPlayed,
	payment_method_data: notPlayed,
	payment_method_options: notPlayed,
	...OLDER_SESSION,
	permissions: notPlayed,
	phone_number_collection: object({ enabled: flag }),
	redirect_on_completion: notPlayed,
	return_url: notPlayed,
	saved_payment_method_options: notPlayed,
	setup_intent_data: notPlayed,
	shipping_address_collection: notPlayed,
	shipping_options: notPlayed,
	submit_type: choice('auto', 'book', 'donate', 'pay'),
	subscription_data: notPlayed,
	success_url: required(url),
	tax_id_collection: notPlayed,
	ui_mode: choice('hosted_page', 'hosted'),
	wallet_options: notPlayed
} satisfies FieldsFor<Stripe.Checkout.SessionCreateParams>;

export const SESSION_LIST = {
	...paging,
	created,
	customer: notPlayed,
	customer_account: notPlayed,
	customer_details: object({ email: required(email) }),
	payment_intent: text(),
	payment_link: notPlayed,
	status: choice('complete', 'expired', 'open'),
	subscription: notPlayed
} satisfies FieldsFor<Stripe.Checkout.SessionListParams>;

export const SESSION_EXPIRE = { expand } satisfies FieldsFor<Stripe.Checkout.SessionExpireParams>;
