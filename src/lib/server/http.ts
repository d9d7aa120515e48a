import { error, fail, redirect, type Cookies, type RequestEvent } from '@sveltejs/kit';
import type { Cookie } from 'lucia';
import { message, setError, superValidate, type SuperValidated } from 'sveltekit-superforms';
import { zod4, type ValidationAdapter } from 'sveltekit-superforms/adapters';
import type { z, ZodObject as ZodObjectType } from 'zod';
import type { FormMessage } from '../form';
import type { SignedIn } from './auth/account';
import { inPerson, inPlatform, inTenant, type PlainTx, type TenantTx } from './db/transaction';
import { Refusal } from './failures';

type Fields = Record<string, unknown>;

/** An empty form, or one filled in from what is stored. `id` tells several forms of a page apart. */
export function emptyForm<Out extends Fields, In extends Fields>(
	schema: z.ZodType<Out, In>,
	data: Partial<In> = {},
	id?: string
): Promise<SuperValidated<Out, FormMessage, In>> {
	const options = { errors: false, ...(id === undefined ? {} : { id }) };
	return superValidate<Out, FormMessage, In>(data, adapterOf(schema), options);
}

function adapterOf<Out extends Fields, In extends Fields>(schema: z.ZodType<Out, In>) {
	// superforms wants an object schema; which schemas are one is known only once they are run.
	return zod4(schema as unknown as ZodObjectType) as unknown as ValidationAdapter<Out, In>;
}

/**
 * The one way a form is handled: check what was sent by the schema that the page uses too, act, and
 * give back everything that was typed with the answer. A Refusal becomes a message at its field or
 * above the form; a redirect passes through; any other error is ours.
 * @param act returns the sentence to show when done, or nothing
 */
export async function handleForm<Out extends Fields, In extends Fields>(
	event: RequestEvent,
	schema: z.ZodType<Out, In>,
	act: (data: Out) => Promise<string | void>
) {
	const form = await superValidate<Out, FormMessage, In>(event.request, adapterOf(schema));
	if (!form.valid) return fail(400, { form });
	try {
		const done = await act(form.data);
		return done ? message(form, { kind: 'done', text: done }) : { form };
	} catch (thrown) {
		if (!(thrown instanceof Refusal)) throw thrown;
		const { status, field } = thrown;
		if (field && field in form.data) {
			return setError(form, field as never, thrown.message, { status });
		}
		return message(form, { kind: 'refused', text: thrown.message }, { status });
	}
}

/** For load functions: a Refusal becomes the error page with its status. */
export async function orError<T>(work: Promise<T>): Promise<T> {
	try {
		return await work;
	} catch (thrown) {
		if (thrown instanceof Refusal) error(thrown.status, thrown.message);
		throw thrown;
	}
}

/** Hands a session's cookie to the browser. */
export function setCookie(cookies: Cookies, cookie: Cookie): void {
	cookies.set(cookie.name, cookie.value, { path: '/', ...cookie.attributes });
}

/** The person who is signed in, or a redirect to the sign-in page that leads back here. */
export function demandPerson(event: RequestEvent): SignedIn {
	const { user, session, halfSignedIn, requestId } = event.locals;
	if (!user || !session) {
		const back = event.request.method === 'GET' ? event.url.pathname + event.url.search : '';
		const query = back && back !== '/' ? `?back=${encodeURIComponent(back)}` : '';
		redirect(303, `${halfSignedIn ? '/sign-in/second-step' : '/sign-in'}${query}`);
	}
	return {
		userId: user.id,
		name: user.name,
		email: user.email,
		sessionId: session.id,
		secondStepPassed: session.secondStepPassed,
		userAgent: event.request.headers.get('user-agent') ?? '',
		requestId
	};
}

/** Runs in the account of the person who is signed in. */
export function inAccount<T>(event: RequestEvent, run: (tx: PlainTx) => Promise<T>): Promise<T> {
	const { userId, name, requestId } = demandPerson(event);
	return inPerson(userId, { actor: { kind: 'person', userId, name }, requestId }, run);
}

/** Ends a request for a /desk page that `hooks.server.ts` did not open. */
export function refuseDesk(event: Pick<RequestEvent, 'locals'>): never {
	const { deskRefusal } = event.locals;
	// The same answer as for an operator that does not exist.
	error(deskRefusal?.status ?? 404, deskRefusal?.message ?? 'There is nothing at this address.');
}

/** Who acts on a /desk page, for work that opens transactions of its own. */
export function deskOrigin(event: Pick<RequestEvent, 'locals'>) {
	const { membership, user, requestId } = event.locals;
	if (!membership || !user) refuseDesk(event);
	const { role, operatorId } = membership;
	const actor = { kind: 'member', userId: user.id, name: user.name, role } as const;
	return { operatorId, origin: { actor, requestId } };
}

/** Runs inside the operator of a /desk page; `hooks.server.ts` has checked the membership. */
export function inDesk<T>(
	event: Pick<RequestEvent, 'locals'>,
	run: (tx: TenantTx) => Promise<T>
): Promise<T> {
	const { operatorId, origin } = deskOrigin(event);
	return inTenant(operatorId, origin, run);
}

/** Runs as the platform administration; everybody else gets the page of an unknown address. */
export function inAdministration<T>(
	event: RequestEvent,
	run: (tx: PlainTx) => Promise<T>
): Promise<T> {
	const { user, requestId } = event.locals;
	if (!user?.platformAdmin) error(404, 'There is nothing at this address.');
	const actor = { kind: 'platform', userId: user.id, name: user.name } as const;
	return inPlatform({ actor, requestId }, run);
}

/** A path of this application to go to after signing in; anything else leads home. */
export function safeBack(url: URL): string {
	const back = url.searchParams.get('back') ?? '';
	// One slash, then no second one and no backslash: browsers read both as another host.
	return /^\/(?![/\\])[^\\\s]*$/.test(back) ? back : '/operators';
}
