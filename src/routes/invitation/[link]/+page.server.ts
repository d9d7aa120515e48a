import { redirect } from '@sveltejs/kit';
import { emptySchema, joinSchema } from '$lib/schemas/people';
import { openSession } from '$lib/server/auth/sessions';
import { inPerson } from '$lib/server/db/transaction';
import { demandPerson, emptyForm, handleForm, setCookie } from '$lib/server/http';
import {
	acceptInvitation,
	findInvitation,
	openInvitedAccount
} from '$lib/server/operators/members';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ params }) => ({
	found: await findInvitation(params.link),
	acceptForm: await emptyForm(emptySchema, {}, 'accept'),
	joinForm: await emptyForm(joinSchema, {}, 'join')
});

export const actions: Actions = {
	accept: (event) =>
		handleForm(event, emptySchema, async () => {
			const { userId, name, requestId } = demandPerson(event);
			const slug = await acceptInvitation(event.params.link, { userId, name }, requestId);
			redirect(303, `/desk/${slug}`);
		}),
	join: (event) =>
		handleForm(event, joinSchema, async (data) => {
			const { requestId } = event.locals;
			const person = await openInvitedAccount(event.params.link, data, requestId);
			const slug = await acceptInvitation(event.params.link, person, requestId);
			const actor = { kind: 'person', ...person } as const;
			const cookie = await inPerson(person.userId, { actor, requestId }, (tx) =>
				openSession(tx, {
					userId: person.userId,
					userAgent: event.request.headers.get('user-agent') ?? '',
					secondStepPassed: false,
					replaces: event.locals.session?.id
				})
			);
			setCookie(event.cookies, cookie);
			redirect(303, `/desk/${slug}`);
		})
};
