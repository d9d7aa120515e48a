import { redirect } from '@sveltejs/kit';
import { secondStepSchema } from '$lib/schemas/people';
import { passSecondStep } from '$lib/server/auth/second-step';
import { inPerson } from '$lib/server/db/transaction';
import { emptyForm, handleForm, safeBack, setCookie } from '$lib/server/http';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, url }) => {
	if (locals.user) redirect(303, safeBack(url));
	if (!locals.halfSignedIn) redirect(303, '/sign-in');
	return { form: await emptyForm(secondStepSchema) };
};

export const actions: Actions = {
	default: (event) =>
		handleForm(event, secondStepSchema, async ({ code }) => {
			const { halfSignedIn: person, session, requestId } = event.locals;
			if (!person || !session) redirect(303, '/sign-in');
			const actor = { kind: 'person', userId: person.id, name: person.name } as const;
			const cookie = await inPerson(person.id, { actor, requestId }, (tx) =>
				passSecondStep(
					tx,
					{
						userId: person.id,
						email: person.email,
						sessionId: session.id,
						userAgent: event.request.headers.get('user-agent') ?? ''
					},
					code
				)
			);
			setCookie(event.cookies, cookie);
			redirect(303, safeBack(event.url));
		})
};
