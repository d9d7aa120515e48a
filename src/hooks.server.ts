import {
	error,
	isHttpError,
	isRedirect,
	redirect,
	type Handle,
	type HandleServerError,
	type RequestEvent
} from '@sveltejs/kit';
import { sequence } from '@sveltejs/kit/hooks';
import { randomUUID } from 'node:crypto';
import { sessionCookieName } from '$lib/server/auth/lucia';
import { readSession } from '$lib/server/auth/sessions';
import { problemResponse } from '$lib/server/api';
import { closePool } from '$lib/server/db/client';
import { inPerson } from '$lib/server/db/transaction';
import { env } from '$lib/server/env';
import { setCookie } from '$lib/server/http';
import { log } from '$lib/server/log';
import { observeRequest } from '$lib/server/metrics';
import { findMembership } from '$lib/server/operators/operators';

export const init = async () => {
	env();
	process.on('sveltekit:shutdown', () => {
		void closePool();
	});
};

/** Gives the request an id, logs it without personal data, and counts it. */
const observe: Handle = async ({ event, resolve }) => {
	event.locals.requestId = randomUUID();
	const started = performance.now();
	const note = (status: number) => {
		const ms = performance.now() - started;
		// The route's pattern and not the address: addresses may hold tokens.
		const route = event.route.id ?? 'unknown';
		const { method } = event.request;
		observeRequest(method, route, status, ms / 1000);
		const { requestId } = event.locals;
		log.info({ requestId, method, route, status, ms: Math.round(ms) }, 'request');
	};
	try {
		const response = await resolve(event);
		note(response.status);
		response.headers.set('x-request-id', event.locals.requestId);
		return response;
	} catch (thrown) {
		// A guard below refused or sent elsewhere; SvelteKit makes the answer of it.
		note(isRedirect(thrown) || isHttpError(thrown) ? thrown.status : 500);
		throw thrown;
	}
};

const https = () => env().ORIGIN.startsWith('https:');

const headers: Handle = async ({ event, resolve }) => {
	const response = await resolve(event, {
		preload: ({ type }) => type === 'js' || type === 'css' || type === 'font'
	});
	response.headers.set('x-content-type-options', 'nosniff');
	response.headers.set('referrer-policy', 'strict-origin-when-cross-origin');
	// The gate scans with the camera; nothing else is asked of a device.
	response.headers.set(
		'permissions-policy',
		'camera=(self), geolocation=(), microphone=(), payment=(), usb=()'
	);
	response.headers.set('cross-origin-opener-policy', 'same-origin');
	if (https()) {
		response.headers.set('strict-transport-security', 'max-age=63072000; includeSubDomains');
	}
	// Pages of people who are signed in stay out of shared caches and of the back button after signing out.
	if (event.locals.session && !response.headers.has('cache-control')) {
		response.headers.set('cache-control', 'private, no-store');
	}
	return response;
};

/** Largest body that a form may send, in bytes; uploads have routes of their own. */
const formLimit = 256 * 1024;
/** Forms that carry a plan, with what it was before: its lists may be long, and too long ones get an answer. */
const planLimit = 8 * 1024 * 1024;
const planRoutes = /^\/desk\/\[operator\]\/sites\/\[site\]\/(?:plan|table)\//;
const uploadLimit = 12 * 1024 * 1024;

/**
 * Refuses a request with a body. The body is let run off first: left on the line, it would hold up
 * whatever comes next on the same connection.
 */
async function refuseWrite(event: RequestEvent, status: number, message: string): Promise<never> {
	await event.request.body?.pipeTo(new WritableStream());
	error(status, message);
}

/** Refuses bodies that are too large and writes that come from another site. */
const guardWrites: Handle = async ({ event, resolve }) => {
	if (!['GET', 'HEAD', 'OPTIONS'].includes(event.request.method)) {
		const isUpload = event.request.headers
			.get('content-type')
			?.toLowerCase()
			.startsWith('multipart/form-data');
		const said = event.request.headers.get('content-length');
		if (said === null && event.request.body) {
			await refuseWrite(event, 411, 'Say how long this is.');
		}
		const length = Number(said ?? 0);
		const carriesPlan = planRoutes.test(event.route.id ?? '');
		const [limit, most] = isUpload
			? ([uploadLimit, '12 MB'] as const)
			: carriesPlan
				? ([planLimit, '8 MB'] as const)
				: ([formLimit, '256 kB'] as const);
		if (length > limit) {
			await refuseWrite(event, 413, `This is too large: at most ${most} can be sent.`);
		}
		// SvelteKit checks the origin of forms; this does the same for JSON sent with a session.
		const origin = event.request.headers.get('origin');
		if (event.cookies.get(sessionCookieName) && origin !== null && origin !== event.url.origin) {
			await refuseWrite(event, 403, 'This came from another site.');
		}
	}
	return resolve(event);
};

const identify: Handle = async ({ event, resolve }) => {
	Object.assign(event.locals, {
		session: null,
		user: null,
		halfSignedIn: null,
		membership: null,
		deskRefusal: null
	});
	const id = event.cookies.get(sessionCookieName);
	if (id && event.route.id !== null) {
		const found = await readSession(id);
		if (!found) {
			event.cookies.delete(sessionCookieName, { path: '/' });
		} else {
			event.locals.session = found.session;
			const whole = found.user.secondStepSince === null || found.session.secondStepPassed;
			event.locals[whole ? 'user' : 'halfSignedIn'] = found.user;
			if (found.renewedCookie) setCookie(event.cookies, found.renewedCookie);
		}
	}
	return resolve(event);
};

/** The one place where a /desk address is opened: to members, with the steps their operator wants. */
const guardDesk: Handle = async ({ event, resolve }) => {
	const slug = event.params['operator'];
	const isApi = event.route.id?.startsWith('/api/v1/desk/[operator]') ?? false;
	const isDesk = isApi || event.route.id?.startsWith('/desk/[operator]');
	if (!isDesk || slug === undefined) return resolve(event);
	const { user, requestId } = event.locals;
	if (!user && isApi) return problemResponse(event, 401, 'Sign in first.');
	if (!user) {
		const page = event.locals.halfSignedIn ? '/sign-in/second-step' : '/sign-in';
		redirect(303, `${page}?back=${encodeURIComponent(event.url.pathname)}`);
	}
	const actor = { kind: 'person', userId: user.id, name: user.name } as const;
	const membership = await inPerson(user.id, { actor, requestId }, (tx) =>
		findMembership(tx, user.id, slug)
	);
	// Without a membership the page answers as if there were no such operator.
	if (!membership) return resolve(event);
	if (membership.status === 'suspended') {
		event.locals.deskRefusal = {
			status: 403,
			message: `${membership.name} is suspended. Write to the platform to have it opened again.`
		};
		return resolve(event);
	}
	if (membership.requireSecondStep && user.secondStepSince === null) {
		redirect(303, `/me/second-step?for=${encodeURIComponent(membership.slug)}`);
	}
	event.locals.membership = membership;
	return resolve(event);
};

export const handle = sequence(observe, headers, guardWrites, identify, guardDesk);

export const handleError: HandleServerError = ({ error: thrown, event, status, message }) => {
	const { requestId } = event.locals;
	if (status < 500) return { message, requestId };
	log.error({ requestId, route: event.route.id, err: thrown }, 'request failed');
	return {
		message: 'Something failed on our side. Nothing of what you sent was half done.',
		requestId
	};
};
