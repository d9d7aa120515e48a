import { createHash } from 'node:crypto';
import type { IncomingMessage, ServerResponse } from 'node:http';
import { setTimeout as wait } from 'node:timers/promises';
import type { Route } from './call.ts';
import type { Engine } from './engine.ts';
import { ApiError, invalid } from './errors.ts';
import { expandBody } from './expand.ts';
import type { Fault } from './faults.ts';
import { parseForm, type FormTree } from './form.ts';
import { newId } from './ids.ts';
import { readParams } from './params/read.ts';
import { routes } from './routes.ts';

export interface ApiRequest {
	method: string;
	path: string;
	query: string;
	body: string;
	headers: IncomingMessage['headers'];
}

interface Answer {
	status: number;
	body: string;
	headers: Record<string, string>;
	/** Cut the line instead of answering: the work is done all the same. */
	drop?: boolean;
}

const LONGEST_KEY = 255;

/** The API under /v1: keys, accounts, idempotency, faults, and the resources behind them. */
export class Api {
	#engine: Engine;
	#secretKey: string | undefined;
	/** Idempotency keys of requests that are being worked on. */
	#busy = new Set<string>();

	constructor(engine: Engine, secretKey: string | undefined) {
		this.#engine = engine;
		this.#secretKey = secretKey;
	}

	async handle(request: ApiRequest, response: ServerResponse): Promise<void> {
		const requestId = newId('req', 14);
		let answer: Answer;
		try {
			answer = await this.#answer(request, requestId);
		} catch (error) {
			answer = errorAnswer(error);
		}
		if (answer.drop) {
			response.socket?.destroy();
			return;
		}
		const echoed: Record<string, string> = {};
		for (const name of ['stripe-version', 'stripe-account', 'idempotency-key']) {
			const value = request.headers[name];
			if (typeof value === 'string') echoed[name] = value;
		}
		response.writeHead(answer.status, {
			'content-type': 'application/json',
			'request-id': requestId,
			'cache-control': 'no-cache, no-store',
			...echoed,
			...answer.headers
		});
		response.end(answer.body);
	}

	async #answer(request: ApiRequest, requestId: string): Promise<Answer> {
		this.#checkKey(request.headers.authorization);
		const owner = this.#ownerOf(request.headers['stripe-account']);
		const act = `${request.method} ${request.path}`;
		const fault = this.#engine.faults.forRequest(act);
		if (fault?.fault === '500') throw serverFault();
		if (fault?.fault === '429') throw tooMany();
		const { route, ids } = findRoute(request);
		const params = readRequest(request, route);
		const key = request.method === 'POST' ? keyOf(request.headers['idempotency-key']) : undefined;
		if (!key) return this.#work({ request, requestId, owner, act, route, ids, params, fault });
		const scoped = `${owner} ${key}`;
		const kept = this.#replay(scoped, key, request);
		if (kept) return { ...kept, drop: fault?.fault === 'drop-after-commit' };
		if (this.#busy.has(scoped)) throw inUse(key);
		this.#busy.add(scoped);
		try {
			return await this.#work({ request, requestId, owner, act, route, ids, params, fault, key });
		} finally {
			this.#busy.delete(scoped);
		}
	}

	async #work(task: {
		request: ApiRequest;
		requestId: string;
		owner: string;
		act: string;
		route: Route;
		ids: string[];
		params: Params;
		fault: Fault | undefined;
		key?: string;
	}): Promise<Answer> {
		const { request, requestId, owner, route, ids, params, fault, key } = task;
		if (fault?.fault === 'delay') await wait(fault.ms ?? 2_000);
		const version = request.headers['stripe-version'];
		const call = this.#engine.call(owner, [task.act], {
			requestId,
			idempotencyKey: key ?? null,
			...(typeof version === 'string' ? { apiVersion: version } : {})
		});
		let answer: Answer;
		try {
			const outcome = route.run(call, params.values, ids);
			const body = expandBody(call.tx, outcome.body, params.expand);
			answer = { status: outcome.status, body: pretty(body), headers: {} };
		} catch (error) {
			// What was thrown changed nothing, but a key stands for this answer too.
			call.tx = this.#engine.store.begin();
			answer = errorAnswer(error);
		}
		if (key) {
			call.tx.put('answer', owner, `${owner} ${key}`, {
				path: request.path,
				fingerprint: fingerprint(request),
				status: answer.status,
				body: answer.body,
				requestId,
				createdMs: call.nowMs
			});
		}
		this.#engine.commit(call);
		return { ...answer, drop: fault?.fault === 'drop-after-commit' };
	}

	#replay(scoped: string, key: string, request: ApiRequest): Answer | undefined {
		const kept = this.#engine.store.table('answer').get(scoped)?.value;
		if (!kept || Date.now() - kept.createdMs > 24 * 60 * 60 * 1000) return undefined;
		if (kept.path !== request.path) {
			throw misused(
				`Keys for idempotent requests can only be used for the same endpoint they were first used ` +
					`for ('${kept.path}' vs '${request.path}'). Try using a key other than '${key}' if you ` +
					`meant to execute a different request.`
			);
		}
		if (kept.fingerprint !== fingerprint(request)) {
			throw misused(
				`Keys for idempotent requests can only be used with the same parameters they were first ` +
					`used with. Try using a key other than '${key}' if you meant to execute a different ` +
					`request.`
			);
		}
		return {
			status: kept.status,
			body: kept.body,
			headers: { 'idempotent-replayed': 'true', 'original-request': kept.requestId }
		};
	}

	#checkKey(header: string | undefined): void {
		const key = secretFrom(header);
		if (!key) {
			throw invalid(
				"You did not provide an API key. You need to provide your API key in the Authorization header, using Bearer auth (e.g. 'Authorization: Bearer YOUR_SECRET_KEY').",
				{ status: 401 }
			);
		}
		const right = this.#secretKey ? key === this.#secretKey : /^sk_test_./.test(key);
		if (right) return;
		const shown = `${key.slice(0, 8)}${'*'.repeat(Math.max(4, key.length - 12))}${key.slice(-4)}`;
		throw invalid(`Invalid API Key provided: ${shown}`, { status: 401 });
	}

	#ownerOf(header: string | string[] | undefined): string {
		if (header === undefined) return this.#engine.platform;
		const id = String(header);
		if (this.#engine.store.table('account').has(id)) return id;
		throw invalid(
			`The provided key does not have access to account '${id}' (or that account does not exist). ` +
				'Application access may have been revoked.',
			{ code: 'account_invalid', status: 403 }
		);
	}
}

/** Bearer, or the key as the user name of basic authentication. */
function secretFrom(header: string | undefined): string | undefined {
	const [scheme = '', value = ''] = header?.split(' ') ?? [];
	if (/^bearer$/i.test(scheme)) return value;
	if (/^basic$/i.test(scheme)) return Buffer.from(value, 'base64').toString().split(':')[0];
	return undefined;
}

function keyOf(header: string | string[] | undefined): string | undefined {
	if (header === undefined || header === '') return undefined;
	const key = String(header);
	if (key.length > LONGEST_KEY) {
		throw invalid(`Idempotency keys can be up to ${LONGEST_KEY} characters.`);
	}
	return key;
}

function findRoute(request: ApiRequest): { route: Route; ids: string[] } {
	const given = request.path.split('/');
	for (const route of routes) {
		if (route.method !== request.method) continue;
		const wanted = route.path.split('/');
		if (wanted.length !== given.length) continue;
		const fits = wanted.every((part, i) => part.startsWith('{') || part === given[i]);
		if (!fits) continue;
		const ids = given.filter((_, i) => wanted[i]?.startsWith('{'));
		return { route, ids: ids.map(decodeURIComponent) };
	}
	throw invalid(`Unrecognized request URL (${request.method}: ${request.path}).`, { status: 404 });
}

interface Params {
	values: unknown;
	expand: string[];
}

function readRequest(request: ApiRequest, route: Route): Params {
	const type = request.headers['content-type'] ?? '';
	if (request.body !== '' && !type.startsWith('application/x-www-form-urlencoded')) {
		throw invalid(
			'Invalid request (check that your POST content type is application/x-www-form-urlencoded).'
		);
	}
	const tree: FormTree = { ...parseForm(request.query), ...parseForm(request.body) };
	const values = readParams(tree, route.fields);
	const { expand = [] } = values as { expand?: string[] };
	return { values, expand };
}

function fingerprint(request: ApiRequest): string {
	return createHash('sha256').update(`${request.query}\0${request.body}`).digest('hex');
}

function errorAnswer(error: unknown): Answer {
	if (error instanceof ApiError) {
		return { status: error.status, body: pretty({ error: error.body }), headers: {} };
	}
	console.error(error);
	return { status: 500, body: pretty({ error: serverFault().body }), headers: {} };
}

function pretty(body: object): string {
	return JSON.stringify(body, null, 2);
}

function serverFault(): ApiError {
	return new ApiError(500, { type: 'api_error', message: 'An unknown error occurred.' });
}

function tooMany(): ApiError {
	return invalid(
		'Too many requests hit the API too quickly. We recommend an exponential backoff.',
		{
			code: 'rate_limit',
			status: 429
		}
	);
}

function misused(message: string): ApiError {
	return new ApiError(400, { type: 'idempotency_error', message });
}

function inUse(key: string): ApiError {
	return new ApiError(409, {
		type: 'idempotency_error',
		code: 'idempotency_key_in_use',
		message:
			'There is currently another in-progress request using this idempotent key (that probably ' +
			`means you submitted twice, and the other request is still going through): ${key}. Please ` +
			'try again later.'
	});
}
