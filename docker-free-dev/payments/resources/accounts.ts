import type Stripe from 'stripe';
import { route, seconds, type Call, type Route } from '../call.ts';
import { invalid, missingParameter, missingResource } from '../errors.ts';
import { newId } from '../ids.ts';
import { page } from '../lists.ts';
import { mergeMetadata } from '../metadata.ts';
import {
	ACCOUNT_CREATE,
	ACCOUNT_LINK_CREATE,
	ACCOUNT_LIST,
	ACCOUNT_UPDATE,
	RETRIEVE
} from '../params/tables.ts';
import { emit } from './events.ts';

/** What an account owes before it is complete. */
const TO_BE_GIVEN = ['business_profile.url', 'external_account', 'tos_acceptance.date'];
const LINK_LIVES_S = 300;
const CURRENCY_BY_COUNTRY: Record<string, string> = {
	...{ AU: 'aud', CA: 'cad', CH: 'chf', CZ: 'czk', DK: 'dkk', GB: 'gbp', HU: 'huf', IS: 'isk' },
	...{ JP: 'jpy', KW: 'kwd', NO: 'nok', NZ: 'nzd', PL: 'pln', SE: 'sek', US: 'usd' }
};

/** The platform's own account, complete from the start. */
export function platformAccount(id: string, created: number): Stripe.Account {
	return {
		...newAccount(id, created, { country: 'DE', type: 'standard', email: 'platform@example.test' }),
		...complete()
	};
}

function newAccount(
	id: string,
	created: number,
	params: Stripe.AccountCreateParams
): Stripe.Account {
	const country = params.country?.toUpperCase() ?? 'DE';
	const profile = params.business_profile;
	return {
		id,
		object: 'account',
		business_profile: {
			annual_revenue: null,
			estimated_worker_count: null,
			mcc: profile?.mcc ?? null,
			minority_owned_business_designation: null,
			name: profile?.name ?? null,
			product_description: profile?.product_description ?? null,
			specified_commercial_transactions_act_url: null,
			support_address: null,
			support_email: profile?.support_email ?? null,
			support_phone: profile?.support_phone ?? null,
			support_url: null,
			url: profile?.url ?? null
		},
		business_type: params.business_type ?? null,
		capabilities: { card_payments: 'inactive', transfers: 'inactive' },
		charges_enabled: false,
		country,
		created,
		default_currency: params.default_currency ?? CURRENCY_BY_COUNTRY[country] ?? 'eur',
		details_submitted: false,
		email: params.email ?? null,
		metadata: mergeMetadata(null, params.metadata),
		payouts_enabled: false,
		requirements: requirements(TO_BE_GIVEN, 'requirements.past_due'),
		type: params.type ?? 'standard'
	};
}

function requirements(
	due: string[],
	disabled: Stripe.Account.Requirements.DisabledReason | null
): Stripe.Account.Requirements {
	return {
		alternatives: [],
		current_deadline: null,
		currently_due: due,
		disabled_reason: disabled,
		errors: [],
		eventually_due: due,
		past_due: due,
		pending_verification: []
	};
}

/** What completing an account changes. */
function complete() {
	return {
		capabilities: { card_payments: 'active', transfers: 'active' },
		charges_enabled: true,
		details_submitted: true,
		payouts_enabled: true,
		requirements: requirements([], null)
	} satisfies Partial<Stripe.Account>;
}

/** @throws ApiError when the platform has no such account. */
export function findAccount(call: Call, id: string, param = 'account'): Stripe.Account {
	const account = call.tx.row('account', id)?.value;
	if (!account) throw missingResource('account', id, param);
	return account;
}

/** Its owner has given all that the service asks: the account takes money. */
export function completeAccount(call: Call, account: Stripe.Account): Stripe.Account {
	return changeAccount(call, { ...account, ...complete() });
}

/** The service wants more papers: the account takes no money until it is completed again. */
export function restrictAccount(call: Call, account: Stripe.Account): Stripe.Account {
	return changeAccount(call, {
		...account,
		charges_enabled: false,
		payouts_enabled: false,
		requirements: requirements(['individual.verification.document'], 'requirements.past_due')
	});
}

function changeAccount(call: Call, account: Stripe.Account): Stripe.Account {
	call.tx.put('account', call.platform, account.id, account);
	emit(call, 'account.updated', account, account.id);
	return account;
}

/**
 * Refuses payments for an account that was restricted. One that was never completed may take test
 * payments, as with the service's own test keys.
 */
export function refuseRestricted(call: Call): void {
	const account = findAccount(call, call.owner);
	if (account.details_submitted && !account.charges_enabled) {
		throw invalid('Your account cannot currently make charges.', { code: 'account_invalid' });
	}
}

export const accountRoutes: Route[] = [
	route<object>('GET', '/v1/account', RETRIEVE, (call) => findAccount(call, call.owner)),
	route<Stripe.AccountCreateParams>('POST', '/v1/accounts', ACCOUNT_CREATE, (call, params) => {
		const id = newId('acct', 16);
		const account = newAccount(id, seconds(call), params);
		return call.tx.put('account', call.platform, id, account);
	}),
	route<Stripe.AccountListParams>('GET', '/v1/accounts', ACCOUNT_LIST, (call, params) => {
		const rows = call.tx.rows('account').filter((row) => row.id !== call.platform);
		return page(rows, params, '/v1/accounts', (value) => value.created ?? 0);
	}),
	route<object>('GET', '/v1/accounts/{account}', RETRIEVE, (call, _params, [id = '']) =>
		findAccount(call, id)
	),
	route<Stripe.AccountUpdateParams>(
		'POST',
		'/v1/accounts/{account}',
		ACCOUNT_UPDATE,
		(call, params, [id = '']) => {
			const account = findAccount(call, id);
			return changeAccount(call, {
				...account,
				business_profile: account.business_profile
					? { ...account.business_profile, ...textsOf(params.business_profile) }
					: null,
				business_type: params.business_type ?? account.business_type,
				default_currency: params.default_currency ?? account.default_currency,
				email: params.email ?? account.email,
				metadata: mergeMetadata(account.metadata ?? {}, params.metadata)
			});
		}
	),
	route<object>('DELETE', '/v1/accounts/{account}', {}, (call, _params, [id = '']) => {
		findAccount(call, id);
		if (call.tx.rows('balance', id).length > 0) {
			throw invalid('This account has a balance and can not be deleted.', { param: 'account' });
		}
		call.tx.remove('account', id);
		return { id, object: 'account', deleted: true };
	}),
	route<Stripe.AccountLinkCreateParams>(
		'POST',
		'/v1/account_links',
		ACCOUNT_LINK_CREATE,
		(call, params): Stripe.AccountLink => {
			findAccount(call, params.account);
			if (params.return_url === undefined) throw missingParameter('return_url');
			if (params.refresh_url === undefined) throw missingParameter('refresh_url');
			const token = newId('link', 32);
			const expiresAt = seconds(call) + LINK_LIVES_S;
			call.tx.put('onboarding', call.platform, token, {
				account: params.account,
				returnUrl: params.return_url,
				refreshUrl: params.refresh_url,
				expiresAt,
				used: false
			});
			return {
				object: 'account_link',
				created: seconds(call),
				expires_at: expiresAt,
				url: `${call.base}/onboarding/${token}`
			};
		}
	)
];

function textsOf(profile: Stripe.AccountUpdateParams.BusinessProfile | undefined) {
	const { name, product_description, support_email, support_phone, url } = profile ?? {};
	const given = { name, product_description, support_email, support_phone, url };
	return Object.fromEntries(Object.entries(given).filter(([, value]) => value !== undefined));
}
