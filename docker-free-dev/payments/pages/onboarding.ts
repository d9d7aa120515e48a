import type { ServerResponse } from 'node:http';
import type { DoubleRequest } from '../../lib/http-double.ts';
import type { Engine } from '../engine.ts';
import { completeAccount, findAccount } from '../resources/accounts.ts';
import { escape, redirect, sendPage } from './layout.ts';

/** The page on which an account's owner gives what the service asks; here a press of a button. */
export function handleOnboarding(
	engine: Engine,
	token: string,
	request: DoubleRequest,
	response: ServerResponse
): void {
	const link = engine.store.table('onboarding').get(token);
	if (!link) return sendPage(response, 404, 'Not found', '<h1>There is no such link.</h1>');
	const { account: id, returnUrl, refreshUrl, expiresAt, used } = link.value;
	// As with the real service: a spent link leads to where a new one is made.
	if (used || expiresAt * 1000 < Date.now()) return redirect(response, refreshUrl);
	const call = engine.call(engine.platform, [`POST /onboarding/${token}`]);
	const account = findAccount(call, id);
	if (request.method !== 'POST') {
		return sendPage(
			response,
			200,
			'Complete the account',
			`<h1>Complete the account</h1>
<p>Account <code>${escape(id)}</code>${account.email ? ` of ${escape(account.email)}` : ''}.</p>
<p>The real service asks here for the business, the people and the bank account.</p>
<form method="post" class="panel">
<div class="actions">
<button name="act" value="complete">Give everything and return</button>
<button name="act" value="leave">Return without completing</button>
</div>
</form>`
		);
	}
	if (new URLSearchParams(request.body).get('act') !== 'leave') completeAccount(call, account);
	call.tx.put('onboarding', engine.platform, token, { ...link.value, used: true });
	engine.commit(call);
	redirect(response, returnUrl);
}
