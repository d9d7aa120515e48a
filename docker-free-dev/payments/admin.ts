import type { ServerResponse } from 'node:http';
import { sendJson, type DoubleRequest } from '../lib/http-double.ts';
import { findCard } from './cards.ts';
import type { Engine } from './engine.ts';
import { ApiError, invalid, missingResource } from './errors.ts';
import { completeAccount, findAccount, restrictAccount } from './resources/accounts.ts';
import { balanceOf } from './resources/balance.ts';
import { payCheckout } from './resources/checkout.ts';
import { closeDispute } from './resources/disputes.ts';
import type { Challenge } from './resources/pay.ts';
import { expireSession } from './resources/sessions.ts';

type Body = Record<string, unknown>;
type Handler = (engine: Engine, id: string, body: Body | unknown[]) => unknown;

/** Helpers for tests, beside the API: none of them exists at the real service. */
const HANDLERS: Record<string, Handler> = {
	'GET health': () => ({ ok: true }),
	'GET state': (engine) => state(engine),
	'GET faults': (engine) => engine.faults.waiting,
	'POST faults': (engine, _id, body) => {
		try {
			engine.faults.add(body);
		} catch (error) {
			throw invalid(error instanceof Error ? error.message : String(error));
		}
		return engine.faults.waiting;
	},
	'DELETE faults': (engine) => {
		engine.faults.clear();
		return [];
	},
	'POST checkout/{id}/pay': pay,
	'POST checkout/{id}/expire': (engine, id) => {
		const row = engine.store.table('session').get(id);
		if (!row) throw missingResource('checkout.session', id, 'session');
		const call = engine.call(row.owner, [`POST /v1/checkout/sessions/${id}/expire`]);
		const session = expireSession(call, row.value);
		engine.commit(call);
		return session;
	},
	'POST advance': (engine, _id, body) => {
		const { subject } = body as Body;
		// Sessions end at their own time; this hurries refunds and disputes.
		const done = engine.runDueTasks((task) =>
			subject === undefined ? task.what !== 'expire_session' : task.subject === subject
		);
		return { done };
	},
	'POST accounts/{id}/complete': (engine, id) => onAccount(engine, id, completeAccount),
	'POST accounts/{id}/restrict': (engine, id) => onAccount(engine, id, restrictAccount),
	'POST disputes/{id}/close': (engine, id, body) => {
		const row = engine.store.table('dispute').get(id);
		if (!row) throw missingResource('dispute', id, 'dispute');
		const { status } = body as Body;
		if (status !== 'won' && status !== 'lost') throw invalid('"status" is won or lost.');
		const call = engine.call(row.owner, [`POST /_double/disputes/${id}/close`]);
		const dispute = closeDispute(call, row.value, status);
		engine.commit(call);
		return dispute;
	},
	'POST webhooks': (engine, _id, body) => {
		const { url, secret } = body as Body;
		if (typeof url !== 'string' || !URL.canParse(url)) throw invalid('"url" is an address.');
		engine.webhooks.target = {
			url,
			secret: typeof secret === 'string' ? secret : engine.webhooks.target.secret
		};
		return { url };
	},
	'POST webhooks/flush': async (engine) => {
		await engine.webhooks.flush();
		return { pending: engine.webhooks.pending };
	}
};

/** Answers what lies under /_double/. */
export async function handleAdmin(
	engine: Engine,
	request: DoubleRequest,
	response: ServerResponse
): Promise<void> {
	const found = find(`${request.method} ${request.path.slice('/_double/'.length)}`);
	if (!found) {
		return sendJson(response, 404, {
			error: { message: `No such helper. There are: ${Object.keys(HANDLERS).join('; ')}` }
		});
	}
	try {
		const body = readJson(request.body);
		sendJson(response, 200, await found.handler(engine, found.id, body));
	} catch (error) {
		if (!(error instanceof ApiError)) throw error;
		sendJson(response, error.status, { error: error.body });
	}
}

function find(act: string): { handler: Handler; id: string } | undefined {
	for (const [name, handler] of Object.entries(HANDLERS)) {
		const [before = '', after] = name.split('{id}');
		if (after === undefined ? act === name : act.startsWith(before) && act.endsWith(after)) {
			const id = after === undefined ? '' : act.slice(before.length, act.length - after.length);
			if (!id.includes('/')) return { handler, id };
		}
	}
	return undefined;
}

function readJson(text: string): Body | unknown[] {
	if (text === '') return {};
	try {
		const value: unknown = JSON.parse(text);
		if (typeof value === 'object' && value !== null) return value as Body | unknown[];
	} catch {
		// Said below.
	}
	throw invalid('The body is a JSON object or list.');
}

/** Does what the payable page does; a refused card is answered 402 with the documented error. */
function pay(engine: Engine, id: string, body: Body | unknown[]): unknown {
	const row = engine.store.table('session').get(id);
	if (!row) throw missingResource('checkout.session', id, 'session');
	const { card: number = '4242424242424242', challenge, email, name } = body as Body;
	const card = findCard(String(number));
	if (!card) {
		throw new ApiError(402, {
			type: 'card_error',
			code: 'incorrect_number',
			message: 'Your card number is incorrect.',
			param: 'number'
		});
	}
	const answered: Challenge = challenge === 'fail' ? 'fail' : 'pass';
	const call = engine.call(row.owner, payCauses(id));
	const payer = {
		email: typeof email === 'string' ? email : (row.value.customer_email ?? 'visitor@example.test'),
		name: typeof name === 'string' ? name : null
	};
	const result = payCheckout(call, row.value, card, payer, answered);
	engine.commit(call);
	if (result.paid) return result.session;
	throw new ApiError(402, result.error);
}

/**
 * By what a fault for webhooks may name a payment. Nobody calls the API to pay, so the call that made
 * the session counts as well.
 */
export function payCauses(session: string): string[] {
	return [
		`POST /_double/checkout/${session}/pay`,
		`POST /pay/${session}`,
		'POST /v1/checkout/sessions'
	];
}

function onAccount(engine: Engine, id: string, change: typeof completeAccount): unknown {
	const call = engine.call(engine.platform, [`POST /v1/accounts/${id}`]);
	const account = change(call, findAccount(call, id));
	engine.commit(call);
	return account;
}

function state(engine: Engine): unknown {
	const tx = engine.store.begin();
	const count = (kind: Parameters<typeof tx.rows>[0]) => engine.store.table(kind).size;
	return {
		platform: engine.platform,
		webhook_url: engine.webhooks.target.url ?? null,
		pending_webhooks: engine.webhooks.pending,
		pending_tasks: count('task'),
		faults: engine.faults.waiting,
		counts: {
			sessions: count('session'),
			payment_intents: count('intent'),
			charges: count('charge'),
			refunds: count('refund'),
			disputes: count('dispute'),
			events: count('event')
		},
		accounts: tx.rows('account').map(({ id, value }) => ({
			id,
			email: value.email,
			charges_enabled: value.charges_enabled,
			balance: Object.fromEntries(balanceOf(tx, id))
		}))
	};
}
