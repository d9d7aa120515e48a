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

/** What a plain look-up takes. */
export const RETRIEVE = { expand };

export const ACCOUNT_LIST = { ...paging, created } satisfies FieldsFor<Stripe.AccountListParams>;

const BUSINESS_PROFILE = object({
	annual_revenue: notPlayed,
	estimated_worker_count: notPlayed,
	mcc: text(4),
	minority_owned_business_designation: notPlayed,
	monthly_estimated_revenue: notPlayed,
	name: text(),
	product_description: text(),
	specified_commercial_transactions_act_url: notPlayed,
	support_address: notPlayed,
	support_email: email,
	support_phone: text(),
	support_url: url,
	url
} satisfies FieldsFor<Stripe.AccountCreateParams.BusinessProfile>);

const CAPABILITIES = object({
	card_payments: object({ requested: flag }),
	transfers: object({ requested: flag })
});

const ACCOUNT_BOTH = {
	account_token: notPlayed,
	business_profile: BUSINESS_PROFILE,
	business_type: choice('company', 'government_entity', 'individual', 'non_profit'),
	capabilities: CAPABILITIES,
	company: notPlayed,
	default_currency: currency,
	documents: notPlayed,
	email,
	expand,
	external_account: notPlayed,
	groups: notPlayed,
	individual: notPlayed,
	metadata,
	settings: notPlayed,
	tos_acceptance: notPlayed
};

export const ACCOUNT_CREATE = {
	...ACCOUNT_BOTH,
	controller: object({
		fees: object({ payer: choice('account', 'application') }),
		losses: object({ payments: choice('application', 'stripe') }),
		requirement_collection: choice('application', 'stripe'),
		stripe_dashboard: object({ type: choice('express', 'full', 'none') })
	} satisfies FieldsFor<Stripe.AccountCreateParams.Controller>),
	country: text(2),
	type: choice('custom', 'express', 'standard')
} satisfies FieldsFor<Stripe.AccountCreateParams>;

export const ACCOUNT_UPDATE = ACCOUNT_BOTH satisfies FieldsFor<Stripe.AccountUpdateParams>;

export const ACCOUNT_LINK_CREATE = {
	account: required(text()),
	type: required(choice('account_onboarding', 'account_update')),
	/** Of older versions of the API. */
	collect: choice('currently_due', 'eventually_due'),
	collection_options: object({
		fields: choice('currently_due', 'eventually_due'),
		future_requirements: choice('include', 'omit'),
		requirement_restrictions: notPlayed
	}),
	expand,
	refresh_url: url,
	return_url: url
} satisfies FieldsFor<Stripe.AccountLinkCreateParams>;

/** Parameters that older versions of the API take. */
const OLDER_INTENT = { payment_method_types: list(choice('card')) };

export const INTENT_CREATE = {
	amount: required(integer(1)),
	currency: required(currency),
	allowed_payment_method_types: list(choice('card')),
	amount_details: notPlayed,
	application_fee_amount: integer(),
	automatic_payment_methods: object({
		enabled: required(flag),
		allow_redirects: choice('always', 'never')
	}),
	capture_method: choice('automatic', 'automatic_async'),
	confirm: flag,
	confirmation_method: choice('automatic', 'manual'),
	confirmation_token: notPlayed,
	customer: notPlayed,
	customer_account: notPlayed,
	description: text(1000),
	error_on_requires_action: notPlayed,
	excluded_payment_method_types: notPlayed,
	expand,
	hooks: notPlayed,
	mandate: notPlayed,
	mandate_data: notPlayed,
	metadata,
	off_session: notPlayed,
	on_behalf_of: notPlayed,
	payment_details: notPlayed,
	payment_method: text(),
	payment_method_configuration: notPlayed,
	payment_method_data: notPlayed,
	payment_method_options: notPlayed,
	...OLDER_INTENT,
	radar_options: notPlayed,
	receipt_email: email,
	return_url: url,
	setup_future_usage: notPlayed,
	shipping: notPlayed,
	statement_descriptor: text(22),
	statement_descriptor_suffix: text(22),
	transfer_data: notPlayed,
	transfer_group: notPlayed,
	use_stripe_sdk: notPlayed
} satisfies FieldsFor<Stripe.PaymentIntentCreateParams>;

export const INTENT_CONFIRM = {
	allowed_payment_method_types: list(choice('card')),
	amount_details: notPlayed,
	amount_to_confirm: notPlayed,
	capture_method: choice('automatic', 'automatic_async'),
	confirmation_token: notPlayed,
	error_on_requires_action: notPlayed,
	excluded_payment_method_types: notPlayed,
	expand,
	hooks: notPlayed,
	mandate: notPlayed,
	mandate_data: notPlayed,
	off_session: notPlayed,
	payment_details: notPlayed,
	payment_method: text(),
	payment_method_data: notPlayed,
	payment_method_options: notPlayed,
	...OLDER_INTENT,
	radar_options: notPlayed,
	receipt_email: email,
	return_url: url,
	setup_future_usage: notPlayed,
	shipping: notPlayed,
	use_stripe_sdk: notPlayed
} satisfies FieldsFor<Stripe.PaymentIntentConfirmParams>;

export const INTENT_CANCEL = {
	cancellation_reason: choice('abandoned', 'duplicate', 'fraudulent', 'requested_by_customer'),
	expand
} satisfies FieldsFor<Stripe.PaymentIntentCancelParams>;

export const INTENT_LIST = {
	...paging,
	created,
	customer: notPlayed,
	customer_account: notPlayed
} satisfies FieldsFor<Stripe.PaymentIntentListParams>;

export const CHARGE_LIST = {
	...paging,
	created,
	customer: notPlayed,
	payment_intent: text(),
	transfer_group: notPlayed
} satisfies FieldsFor<Stripe.ChargeListParams>;

export const REFUND_CREATE = {
	amount: integer(1),
	charge: text(),
	currency: notPlayed,
	customer: notPlayed,
	expand,
	instructions_email: notPlayed,
	metadata,
	origin: notPlayed,
	payment_intent: text(),
	reason: choice('duplicate', 'fraudulent', 'requested_by_customer'),
	refund_application_fee: flag,
	reverse_transfer: notPlayed
} satisfies FieldsFor<Stripe.RefundCreateParams>;

export const REFUND_UPDATE = { expand, metadata } satisfies FieldsFor<Stripe.RefundUpdateParams>;

export const REFUND_LIST = {
	...paging,
	created,
	charge: text(),
	payment_intent: text()
} satisfies FieldsFor<Stripe.RefundListParams>;

export const DISPUTE_LIST = {
	...paging,
	created,
	charge: text(),
	payment_intent: text()
} satisfies FieldsFor<Stripe.DisputeListParams>;

export const FEE_LIST = {
	...paging,
	created,
	charge: text()
} satisfies FieldsFor<Stripe.ApplicationFeeListParams>;

export const BALANCE_LIST = {
	...paging,
	created,
	currency,
	payout: notPlayed,
	source: text(),
	type: text()
} satisfies FieldsFor<Stripe.BalanceTransactionListParams>;

export const EVENT_LIST = {
	...paging,
	created,
	delivery_success: flag,
	type: text(),
	types: list(text(), 20)
} satisfies FieldsFor<Stripe.EventListParams>;
