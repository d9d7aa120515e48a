import type { ServerResponse } from 'node:http';
import type { DoubleRequest } from '../../lib/http-double.ts';
import type { Engine } from '../engine.ts';
import { showAmount } from '../money.ts';
import { handleCheckout } from './checkout.ts';
import { escape, sendPage } from './layout.ts';
import { handleOnboarding } from './onboarding.ts';

/** Answers the pages for people; false when the address is none of them. */
export function handlePage(
	engine: Engine,
	request: DoubleRequest,
	response: ServerResponse
): boolean {
	const [, kind, id = '', more] = request.path.split('/');
	if (more !== undefined || !['GET', 'POST'].includes(request.method)) return false;
	if (request.path === '/') sendHome(response);
	else if (kind === 'pay' && id) handleCheckout(engine, id, request, response);
	else if (kind === 'onboarding' && id) handleOnboarding(engine, id, request, response);
	else if (kind === 'receipt' && id) sendReceipt(engine, id, response);
	else return false;
	return true;
}

function sendHome(response: ServerResponse): void {
	sendPage(
		response,
		200,
		'Payment double',
		`<h1>Payment double</h1>
<p>It stands for the payment service while you develop. What it holds is at
<a href="/_double/state">/_double/state</a>.</p>`
	);
}

function sendReceipt(engine: Engine, id: string, response: ServerResponse): void {
	const charge = engine.store.table('charge').get(id)?.value;
	if (!charge) return sendPage(response, 404, 'Not found', '<h1>There is no such receipt.</h1>');
	sendPage(
		response,
		200,
		'Receipt',
		`<h1>Receipt</h1><p>${showAmount(charge.amount, charge.currency)} paid by card, ` +
			`${showAmount(charge.amount_refunded, charge.currency)} refunded.</p>` +
			`<p><code>${escape(charge.id)}</code></p>`
	);
}
