import { signUpSchema } from '$lib/schemas/people';
import { requestSignUp } from '$lib/server/auth/sign-up';
import { emptyForm, handleForm } from '$lib/server/http';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async () => ({ form: await emptyForm(signUpSchema) });

export const actions: Actions = {
	default: (event) =>
		handleForm(event, signUpSchema, async (data) => {
			await requestSignUp(data, {
				address: event.getClientAddress(),
				requestId: event.locals.requestId
			});
			return `A letter is on its way to ${data.email}. Open the link in it to go on.`;
		})
};
