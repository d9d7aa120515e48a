import { redirect } from '@sveltejs/kit';
import { signInSchema } from '$lib/schemas/people';
import { signIn } from '$lib/server/auth/sign-in';
import { emptyForm, handleForm, safeBack, setCookie } from '$lib/server/http';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, url }) => {
	if (locals.user) redirect(303, safeBack(url));
	if (locals.halfSignedIn) redirect(303, `/sign-in/second-step${url.search}`);
	return { form: await emptyForm(signInSchema), again: url.searchParams.get('done') };
};

export const actions: Actions = {
	default: (event) =>
		handleForm(event, signInSchema, async (data) => {
			const { cookie, secondStepNeeded } = await signIn({
				...data,
				address: event.getClientAddress(),
				userAgent: event.request.headers.get('user-agent') ?? '',
				requestId: event.locals.requestId,
				presentSessionId: event.locals.session?.id
			});
			setCookie(event.cookies, cookie);
			redirect(
				303,
				secondStepNeeded ? `/sign-in/second-step${event.url.search}` : safeBack(event.url)
			);
		})
};
