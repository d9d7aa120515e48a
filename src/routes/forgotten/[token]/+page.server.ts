import { redirect } from '@sveltejs/kit';
import { newPasswordSchema } from '$lib/schemas/people';
import { linkWorks, setNewPassword } from '$lib/server/auth/account';
import { emptyForm, handleForm } from '$lib/server/http';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ params }) => ({
	form: await emptyForm(newPasswordSchema),
	works: await linkWorks(params.token, 'password')
});

export const actions: Actions = {
	default: (event) =>
		handleForm(event, newPasswordSchema, async ({ password }) => {
			await setNewPassword(event.params.token, password, event.locals.requestId);
			redirect(303, '/sign-in?done=password');
		})
};
