import { redirect } from '@sveltejs/kit';
import { emptySchema } from '$lib/schemas/people';
import { confirmNewAddress, linkWorks } from '$lib/server/auth/account';
import { emptyForm, handleForm } from '$lib/server/http';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ params }) => ({
	form: await emptyForm(emptySchema),
	works: await linkWorks(params.token, 'address')
});

export const actions: Actions = {
	default: (event) =>
		handleForm(event, emptySchema, async () => {
			await confirmNewAddress(event.params.token, event.locals.requestId);
			redirect(303, event.locals.user ? '/me' : '/sign-in?done=address');
		})
};
