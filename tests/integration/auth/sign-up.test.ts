import { expect, test } from 'vitest';
import { confirmSignUp, findSignUp, requestSignUp } from '../../../src/lib/server/auth/sign-up.ts';
import { readSession } from '../../../src/lib/server/auth/sessions.ts';
import { adminQuery } from '../../support/database.ts';
import { lastLinkTo, lettersTo } from '../../support/letters.ts';
import { makePerson, newAddress, newRequest, PASSWORD, trySignIn } from '../../support/people.ts';
import { refusalOf } from '../../support/refusals.ts';

const wanted = (email: string) => ({
	email,
	name: 'Juno Fell',
	operatorName: 'Fell Mist Terrace',
	password: PASSWORD
});

test('a sign-up is nothing until its letter is answered, and then an account, an operator, a session', async () => {
	const email = newAddress();
	await requestSignUp(wanted(email), newRequest());
	expect((await refusalOf(trySignIn({ email, password: PASSWORD }))).kind).toBe('invalid');
	const token = await lastLinkTo(email);
	expect(await findSignUp(token)).toEqual({ email, operatorName: 'Fell Mist Terrace' });

	const { cookie, slug } = await confirmSignUp(token, newRequest());
	expect(slug).toMatch(/^fell-mist-terrace/);
	expect((await readSession(cookie.value))?.user.email).toBe(email);
	await expect(trySignIn({ email, password: PASSWORD })).resolves.toBeDefined();
	const [member] = await adminQuery<{ role: string }>(
		`select m.role from member m join operator o on o.id = m.operator_id where o.slug = $1`,
		[slug]
	);
	expect(member?.role).toBe('owner');
});

test('the link works once, for two who open it at the same time as well', async () => {
	const email = newAddress();
	await requestSignUp(wanted(email), newRequest());
	const token = await lastLinkTo(email);
	const both = await Promise.allSettled([
		confirmSignUp(token, newRequest()),
		confirmSignUp(token, newRequest())
	]);
	expect(both.map((one) => one.status).sort()).toEqual(['fulfilled', 'rejected']);
	expect((await refusalOf(confirmSignUp(token, newRequest()))).kind).toBe('not_found');
	expect(await findSignUp(token)).toBeNull();
	const accounts = await adminQuery('select 1 from "user" where email = $1', [email]);
	expect(accounts).toHaveLength(1);
});

test('two sign-ups of one address make one account, whichever is confirmed first', async () => {
	const email = newAddress();
	await requestSignUp(wanted(email), newRequest());
	const first = await lastLinkTo(email);
	await requestSignUp(wanted(email), newRequest());
	const second = await lastLinkTo(email);
	await confirmSignUp(second, newRequest());
	expect((await refusalOf(confirmSignUp(first, newRequest()))).kind).toBe('not_found');
});

test('a link that has lapsed opens nothing', async () => {
	const email = newAddress();
	await requestSignUp(wanted(email), newRequest());
	const token = await lastLinkTo(email);
	await adminQuery(`update sign_up set expires_at = now() - interval '1 second' where email = $1`, [
		email
	]);
	expect(await findSignUp(token)).toBeNull();
	expect((await refusalOf(confirmSignUp(token, newRequest()))).kind).toBe('not_found');
});

test('who signs up learns nothing of an account at the address; its holder is told by letter', async () => {
	const known = await makePerson();
	const unknown = newAddress();
	const answers = await Promise.all([
		requestSignUp(wanted(known.email), newRequest()),
		requestSignUp(wanted(unknown), newRequest())
	]);
	expect(answers[0]).toEqual(answers[1]);
	expect((await lettersTo(known.email)).map((letter) => letter.kind)).toEqual(['sign_up_known']);
	expect((await lettersTo(unknown)).map((letter) => letter.kind)).toEqual(['sign_up']);
	// The account that was there keeps its password.
	await expect(trySignIn(known)).resolves.toBeDefined();
});

test('neither the password nor the link lies in the database in the clear', async () => {
	const email = newAddress();
	await requestSignUp(wanted(email), newRequest());
	const token = await lastLinkTo(email);
	const [row] = await adminQuery<{ passwordHash: string; tokenHash: string }>(
		`select password_hash as "passwordHash", token_hash as "tokenHash" from sign_up where email = $1`,
		[email]
	);
	expect(row?.passwordHash).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
	expect(row?.tokenHash).not.toBe(token);
});

test('one mailbox is written to five times an hour, whoever asks', async () => {
	const email = newAddress();
	for (let i = 0; i < 5; i++) await requestSignUp(wanted(email), newRequest());
	const refusal = await refusalOf(requestSignUp(wanted(email), newRequest()));
	expect(refusal.status).toBe(429);
	expect(await lettersTo(email)).toHaveLength(5);
});
