import { redirect } from '@sveltejs/kit';
import { env } from '$lib/server/env';
import { deskOrigin, orError } from '$lib/server/http';
import { onboardingAddress } from '$lib/server/payments/accounts';
import type { RequestHandler } from './$types';

/** Leads to the payment service, where the account is completed; it leads back to the settings. */
export const GET: RequestHandler = async (event) => {
	const { operatorId, origin } = deskOrigin(event);
	const back = `${env().ORIGIN}/desk/${event.params.operator}/money/settings`;
	redirect(303, await orError(onboardingAddress(operatorId, origin, back)));
};
