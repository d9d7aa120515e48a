import type { ServerResponse } from 'node:http';
import type Stripe from 'stripe';
import type { DoubleRequest } from '../../lib/http-double.ts';
import { payCauses } from '../admin.ts';
import { CARDS, findCard, type Card } from '../cards.ts';
import type { Engine } from '../engine.ts';
import { showAmount } from '../money.ts';
import { payCheckout, successAddress } from '../resources/checkout.ts';
import { escape, redirect, sendPage } from './layout.ts';

interface Filled {
	email: string;
	name: string;
	number: string;
}

/** The page on which a session is paid. It works without scripts. */
export function handleCheckout(
	engine: Engine,
	id: string,
	request: DoubleRequest,
	response: ServerResponse
): void {
	const row = engine.store.table('session').get(id);
	if (!row) {
		return sendPage(response, 404, 'Not found', '<h1>There is no such payment.</h1>');
	}
	const session = row.value;
	if (session.status !== 'open') return sendClosed(response, session);
	const lines = engine.store.table('terms').get(id)?.value.lineItems ?? [];
	if (request.method !== 'POST') {
		const filled = { email: session.customer_email ?? '', name: '', number: '' };
		return sendForm(response, 200, session, lines, filled);
	}
	const form = new URLSearchParams(request.body);
	const filled: Filled = {
		email: form.get('email') ?? session.customer_email ?? '',
		name: form.get('name') ?? '',
		// A button with a card wins over the field.
		number: form.get('card') || (form.get('number') ?? '')
	};
	const card = findCard(filled.number);
	if (!card) {
		const problem = 'That is not one of the test cards below. Nothing was paid.';
		return sendForm(response, 402, session, lines, filled, problem);
	}
	const answered = form.get('challenge');
	if (card.challenge && answered !== 'pass' && answered !== 'fail') {
		return sendChallenge(response, session, card, filled);
	}
	const call = engine.call(row.owner, payCauses(id));
	const payer = { email: filled.email || null, name: filled.name || null };
	const challenge = answered === 'pass' || answered === 'fail' ? answered : null;
	const result = payCheckout(call, session, card, payer, challenge);
	engine.commit(call);
	if (result.paid) return redirect(response, successAddress(result.session));
	sendForm(response, 402, session, lines, filled, result.error.message);
}

function sendForm(
	response: ServerResponse,
	status: number,
	session: Stripe.Checkout.Session,
	lines: Stripe.LineItem[],
	filled: Filled,
	problem?: string
): void {
	const total = showAmount(session.amount_total ?? 0, session.currency ?? '');
	const rows = lines.map(
		(line) =>
			`<tr><td>${line.quantity} × ${escape(line.description ?? '')}</td>` +
			`<td>${showAmount(line.amount_total, line.currency)}</td></tr>`
	);
	const cards = CARDS.map(
		(card) =>
			`<button class="plain" name="card" value="${card.number}">` +
			`${escape(card.label)} <code>${grouped(card.number)}</code></button>`
	);
	const back = session.cancel_url
		? `<p><a href="${escape(session.cancel_url)}">Back without paying</a></p>`
		: '';
	sendPage(
		response,
		status,
		`Pay ${total}`,
		`<h1>Pay ${total}</h1>
${problem ? `<p class="panel problem" role="alert">${escape(problem)}</p>` : ''}
<section class="panel" aria-label="What is paid">
<table><tbody>${rows.join('')}</tbody>
<tfoot><tr><th scope="row">Total</th><th>${total}</th></tr></tfoot></table>
</section>
<form method="post" class="panel">
<label for="email">E-mail address</label>
<input id="email" name="email" type="email" autocomplete="email" value="${escape(filled.email)}">
<label for="name">Name on the card</label>
<input id="name" name="name" autocomplete="cc-name" value="${escape(filled.name)}">
<label for="number">Card number</label>
<input id="number" name="number" inputmode="numeric" autocomplete="cc-number" value="${escape(filled.number)}">
<div class="actions"><button>Pay ${total}</button></div>
<h2>Or pay with a test card at once</h2>
${cards.join('\n')}
</form>
${back}`
	);
}

function sendChallenge(
	response: ServerResponse,
	session: Stripe.Checkout.Session,
	card: Card,
	filled: Filled
): void {
	const total = showAmount(session.amount_total ?? 0, session.currency ?? '');
	sendPage(
		response,
		200,
		'The bank asks',
		`<h1>The bank asks its customer</h1>
<p>Is this payment of ${total} with the card ending in ${card.number.slice(-4)} yours?</p>
<form method="post" class="panel">
<input type="hidden" name="card" value="${card.number}">
<input type="hidden" name="email" value="${escape(filled.email)}">
<input type="hidden" name="name" value="${escape(filled.name)}">
<div class="actions">
<button name="challenge" value="pass">Complete authentication</button>
<button name="challenge" value="fail">Fail authentication</button>
</div>
</form>`
	);
}

function sendClosed(response: ServerResponse, session: Stripe.Checkout.Session): void {
	if (session.status === 'complete') {
		const address = escape(successAddress(session));
		return sendPage(
			response,
			200,
			'Paid',
			`<h1>This is paid.</h1><p><a href="${address}">Back to the shop</a></p>`
		);
	}
	const back = session.cancel_url
		? `<p><a href="${escape(session.cancel_url)}">Back to the shop</a></p>`
		: '';
	sendPage(
		response,
		410,
		'Expired',
		`<h1>This payment has expired.</h1><p>Nothing was charged.</p>${back}`
	);
}

function grouped(number: string): string {
	return number.replace(/(\d{4})(?=\d)/g, '$1 ');
}
