import { ask, service } from './client';

/** Opens an account at the service for an operator; once, whatever the number of tries. */
export async function openAccount(operator: {
	operatorId: string;
	name: string;
	email: string;
	country: string;
}): Promise<string> {
	const account = await ask(
		service().accounts.create(
			{
				type: 'standard',
				country: operator.country,
				email: operator.email,
				business_profile: { name: operator.name },
				metadata: { operatorId: operator.operatorId }
			},
			{ idempotencyKey: `account-${operator.operatorId}` }
		)
	);
	return account.id;
}

/** Whether an account may take payments. */
export async function readAccount(accountId: string): Promise<{ chargesEnabled: boolean }> {
	const account = await ask(service().accounts.retrieve(accountId));
	return { chargesEnabled: account.charges_enabled };
}

/** A page at the service on which the operator completes its account. */
export async function accountLink(accountId: string, returnUrl: string): Promise<string> {
	const link = await ask(
		service().accountLinks.create({
			account: accountId,
			type: 'account_onboarding',
			refresh_url: returnUrl,
			return_url: returnUrl
		})
	);
	return link.url;
}
