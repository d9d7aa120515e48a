import { forgottenSchema } from '$lib/schemas/people';
import { requestNewPassword } from '$lib/server/auth/account';
import { emptyForm, handleForm } from '$lib/server/http';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async () => ({ form: await emptyForm(forgottenSchema) });

export const actions: Actions = {
	default: (event) =>
		handleForm(event, forgottenSchema, async ({ email }) => {
			await requestNewPassword(email, {
				address: event.getClientAddress(),
				requestId: event.locals.requestId
			});
			return `If ${email} has an account, a letter with a link is on its way.`;
		})
};
