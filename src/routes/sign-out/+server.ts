import { redirect } from '@sveltejs/kit';
import { endSession } from '$lib/server/auth/sessions';
import { inPublic } from '$lib/server/db/transaction';
import { setCookie } from '$lib/server/http';
import type { RequestHandler } from './$types';

export const POST: RequestHandler = async ({ locals, cookies }) => {
	const { session } = locals;
	if (session) {
		const actor = { kind: 'visitor', name: 'nobody yet' } as const;
		setCookie(cookies, await inPublic({ actor }, (tx) => endSession(tx, session.id)));
	}
	redirect(303, '/sign-in?done=out');
};
