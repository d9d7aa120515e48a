import { redirect } from '@sveltejs/kit';
import { emptySchema, sessionHashSchema } from '$lib/schemas/people';
import { endAllSessions, endListedSession, listSessions } from '$lib/server/auth/sessions';
import { demandPerson, emptyForm, handleForm, inAccount } from '$lib/server/http';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const { userId, sessionId } = demandPerson(event);
	return {
		form: await emptyForm(sessionHashSchema),
		sessions: await inAccount(event, (tx) => listSessions(tx, userId, sessionId))
	};
};

export const actions: Actions = {
	end: (event) =>
		handleForm(event, sessionHashSchema, async ({ hash }) => {
			const { userId } = demandPerson(event);
			await inAccount(event, (tx) => endListedSession(tx, userId, hash));
			return 'The session has ended.';
		}),
	everywhere: (event) =>
		handleForm(event, emptySchema, async () => {
			const { userId } = demandPerson(event);
			await inAccount(event, (tx) => endAllSessions(tx, userId));
			redirect(303, '/sign-in?done=everywhere');
		})
};
