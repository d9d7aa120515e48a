import { redirect } from '@sveltejs/kit';
import { emptySchema } from '$lib/schemas/people';
import { confirmSignUp, findSignUp } from '$lib/server/auth/sign-up';
import { emptyForm, handleForm, setCookie } from '$lib/server/http';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ params }) => ({
	form: await emptyForm(emptySchema),
	found: await findSignUp(params.token)
});

export const actions: Actions = {
	// A button and not the link itself confirms: mail filters open links on their own.
	default: (event) =>
		handleForm(event, emptySchema, async () => {
			const { cookie, slug } = await confirmSignUp(event.params.token, {
				userAgent: event.request.headers.get('user-agent') ?? '',
				requestId: event.locals.requestId
			});
			setCookie(event.cookies, cookie);
			redirect(303, `/desk/${slug}`);
		})
};
