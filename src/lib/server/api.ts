import { isHttpError, type RequestEvent } from '@sveltejs/kit';
import { createHash } from 'node:crypto';
import { addDays, isLocalDate } from '../schedule';
import { Refusal } from './failures';
import { log } from './log';

const titles: Record<number, string> = {
	400: 'Not understood',
	401: 'Not signed in',
	403: 'Not allowed',
	404: 'Not found',
	409: 'Conflict',
	413: 'Too large',
	429: 'Too many requests',
	500: 'Fault on our side'
};

/** An error in the form of RFC 9457. */
export function problemResponse(event: RequestEvent, status: number, detail: string): Response {
	const body = {
		type: 'about:blank',
		title: titles[status] ?? 'Error',
		status,
		detail,
		requestId: event.locals.requestId
	};
	return new Response(JSON.stringify(body), {
		status,
		headers: { 'content-type': 'application/problem+json', 'cache-control': 'no-store' }
	});
}

/**
 * The one way an API address answers: JSON with an ETag (a request that knows it gets 304), or problem
 * details.
 * @param seconds how long a cache may keep the answer; 0: it asks each time
 */
export async function answerJson(
	event: RequestEvent,
	work: () => Promise<unknown>,
	{ seconds = 0, shared = false }: { seconds?: number; shared?: boolean } = {}
): Promise<Response> {
	try {
		const body = JSON.stringify(await work());
		const etag = `"${createHash('sha256').update(body).digest('base64url').slice(0, 22)}"`;
		const headers = {
			etag,
			'cache-control': `${shared ? 'public' : 'private'}, ${seconds > 0 ? `max-age=${seconds}` : 'no-cache'}`
		};
		if (event.request.headers.get('if-none-match') === etag) {
			return new Response(null, { status: 304, headers });
		}
		return new Response(body, { headers: { ...headers, 'content-type': 'application/json' } });
	} catch (error) {
		if (error instanceof Refusal) return problemResponse(event, error.status, error.message);
		if (isHttpError(error)) return problemResponse(event, error.status, error.body.message);
		log.error({ requestId: event.locals.requestId, err: error }, 'api request failed');
		return problemResponse(event, 500, 'Something failed on our side.');
	}
}

/** Most days that one request may ask for. */
const mostDays = 92;

/** Reads one or two local dates from the query; both are counted. @throws Refusal */
export function rangeOf(url: URL, fallback: { from: string; to: string }) {
	const from = url.searchParams.get('from') ?? fallback.from;
	const to = url.searchParams.get('to') ?? (url.searchParams.has('from') ? from : fallback.to);
	for (const [name, value] of Object.entries({ from, to })) {
		if (!isLocalDate(value)) {
			throw new Refusal('invalid', `${name} must be a date such as 2027-03-28.`);
		}
	}
	if (from > to) throw new Refusal('invalid', 'to is before from.');
	if (to > addDays(from, mostDays - 1)) {
		throw new Refusal('invalid', `At most ${mostDays} days can be asked for at once.`);
	}
	return { from, to };
}
