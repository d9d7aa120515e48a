import { emptySchema } from '$lib/schemas/people';
import { sellerSchema } from '$lib/schemas/site';
import { demand } from '$lib/server/auth/rights';
import { deskOrigin, emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { log } from '$lib/server/log';
import {
	changeSeller,
	openPaymentAccount,
	readPaymentAccount,
	readSeller,
	refreshAccount
} from '$lib/server/payments/accounts';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const read = () =>
		orError(
			inDesk(event, async (tx) => {
				demand(tx, 'money.settings');
				return { seller: await readSeller(tx), account: await readPaymentAccount(tx) };
			})
		);
	let { seller, account } = await read();
	let away = false;
	if (account && !account.chargesEnabled) {
		const { operatorId, origin } = deskOrigin(event);
		try {
			await refreshAccount(operatorId, origin);
			({ seller, account } = await read());
		} catch (error) {
			log.warn({ requestId: event.locals.requestId, err: error }, 'account not read');
			away = true;
		}
	}
	return {
		form: await emptyForm(sellerSchema, { ...seller, taxId: seller?.taxId ?? '' }, 'seller'),
		accountForm: await emptyForm(emptySchema, {}, 'account'),
		hasSeller: seller !== null,
		account: account
			? {
					accountId: account.accountId,
					chargesEnabled: account.chargesEnabled,
					platformFeeBasisPoints: account.platformFeeBasisPoints
				}
			: null,
		away
	};
};

export const actions: Actions = {
	seller: (event) =>
		handleForm(event, sellerSchema, async ({ taxId, ...data }) => {
			await inDesk(event, (tx) => changeSeller(tx, { ...data, taxId: taxId || null }));
			return 'The seller is saved. Documents already issued keep what they say.';
		}),
	account: (event) =>
		handleForm(event, emptySchema, async () => {
			const { operatorId, origin } = deskOrigin(event);
			await openPaymentAccount(operatorId, origin);
			return 'The account is open. Complete it at the payment service.';
		})
};
