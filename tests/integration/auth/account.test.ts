import { expect, test } from 'vitest';
import {
	changePassword,
	confirmNewAddress,
	demandPassword,
	linkWorks,
	requestNewAddress,
	requestNewPassword,
	setNewPassword,
	type SignedIn
} from '../../../src/lib/server/auth/account.ts';
import { deleteExpired } from '../../../src/lib/server/auth/housekeeping.ts';
import { readSession } from '../../../src/lib/server/auth/sessions.ts';
import { adminQuery } from '../../support/database.ts';
import { lastLinkTo, lettersTo } from '../../support/letters.ts';
import {
	makePerson,
	newAddress,
	newRequest,
	trySignIn,
	type Person
} from '../../support/people.ts';
import { refusalOf } from '../../support/refusals.ts';

const NEW_PASSWORD = 'a bow stands in the east';

async function signedIn(person: Person): Promise<SignedIn> {
	const { cookie } = await trySignIn(person);
	return { ...person, ...newRequest(), sessionId: cookie.value, secondStepPassed: false };
}

async function newPasswordLink(person: Person): Promise<string> {
	await requestNewPassword(person.email, newRequest());
	return lastLinkTo(person.email);
}

test('a forgotten password is set through a link; every session ends and the old one is no use', async () => {
	const person = await makePerson();
	const { sessionId } = await signedIn(person);
	const token = await newPasswordLink(person);
	expect(await linkWorks(token, 'password')).toBe(true);
	await setNewPassword(token, NEW_PASSWORD, 'test');
	expect(await readSession(sessionId)).toBeNull();
	expect((await refusalOf(trySignIn(person))).kind).toBe('invalid');
	await expect(trySignIn({ ...person, password: NEW_PASSWORD })).resolves.toBeDefined();
	expect((await lettersTo(person.email)).at(-1)?.subject).toBe('Your password was changed');
});

test('the link works once, and takes the other links with it', async () => {
	const person = await makePerson();
	const older = await newPasswordLink(person);
	const newer = await newPasswordLink(person);
	await setNewPassword(newer, NEW_PASSWORD, 'test');
	for (const token of [newer, older]) {
		expect(await linkWorks(token, 'password')).toBe(false);
		expect((await refusalOf(setNewPassword(token, NEW_PASSWORD, 'test'))).kind).toBe('not_found');
	}
});

test('a link holds for an hour, and for what it was sent', async () => {
	const person = await makePerson();
	const token = await newPasswordLink(person);
	expect((await refusalOf(confirmNewAddress(token, 'test'))).kind).toBe('not_found');
	await adminQuery(
		`update user_token set expires_at = expires_at - interval '1 hour' where user_id = $1`,
		[person.userId]
	);
	expect(await linkWorks(token, 'password')).toBe(false);
	expect((await refusalOf(setNewPassword(token, NEW_PASSWORD, 'test'))).kind).toBe('not_found');
});

test('asking for a new password tells nobody whether there is an account', async () => {
	const person = await makePerson();
	const unknown = newAddress();
	const answers = await Promise.all(
		[person.email, unknown].map((email) => requestNewPassword(email, newRequest()))
	);
	expect(answers).toEqual([undefined, undefined]);
	expect(await lettersTo(unknown)).toEqual([]);
	// The limit is the same for both.
	for (const email of [person.email, unknown]) {
		for (let i = 0; i < 4; i++) await requestNewPassword(email, newRequest());
		expect((await refusalOf(requestNewPassword(email, newRequest()))).status).toBe(429);
	}
});

test('changing the password wants the present one, ends other sessions and renews this one', async () => {
	const person = await makePerson();
	const here = await signedIn(person);
	const elsewhere = await signedIn(person);
	const refusal = await refusalOf(
		changePassword(here, { current: 'not the password', password: NEW_PASSWORD })
	);
	expect([refusal.kind, refusal.field]).toEqual(['invalid', 'current']);
	expect(await readSession(elsewhere.sessionId)).not.toBeNull();
	const cookie = await changePassword(here, { current: person.password, password: NEW_PASSWORD });
	expect(await readSession(here.sessionId)).toBeNull();
	expect(await readSession(elsewhere.sessionId)).toBeNull();
	expect((await readSession(cookie.value))?.user.id).toBe(person.userId);
	expect((await lettersTo(person.email)).at(-1)?.kind).toBe('account_changed');
});

test('a stolen session is no way to guess the password', async () => {
	const thief = await signedIn(await makePerson());
	for (let i = 0; i < 8; i++) {
		expect((await refusalOf(demandPassword(thief, 'a guess'))).kind).toBe('invalid');
	}
	expect((await refusalOf(demandPassword(thief, 'a guess'))).status).toBe(429);
});

test('the right password, asked for again and again, is not refused', async () => {
	const person = await makePerson();
	const here = await signedIn(person);
	for (let i = 0; i < 10; i++) await demandPassword(here, person.password);
});

test('a new address counts once its own link is opened; the old one is warned', async () => {
	const person = await makePerson();
	const email = newAddress();
	await requestNewAddress(await signedIn(person), { current: person.password, email });
	await expect(trySignIn(person)).resolves.toBeDefined();
	expect((await lettersTo(person.email)).at(-1)?.subject).toContain('address was asked for');
	await confirmNewAddress(await lastLinkTo(email), 'test');
	await expect(trySignIn({ ...person, email })).resolves.toBeDefined();
	expect((await refusalOf(trySignIn(person))).kind).toBe('invalid');
});

test('an address that has an account gets no letter, and the asker the same answer', async () => {
	const [person, other] = [await makePerson(), await makePerson()];
	const here = await signedIn(person);
	await requestNewAddress(here, { current: person.password, email: other.email });
	expect(await lettersTo(other.email)).toEqual([]);
});

test('an address taken meanwhile is not taken over', async () => {
	const person = await makePerson();
	const email = newAddress();
	await requestNewAddress(await signedIn(person), { current: person.password, email });
	await adminQuery('update "user" set email = $1 where id = $2', [
		email,
		(await makePerson()).userId
	]);
	const refusal = await refusalOf(confirmNewAddress(await lastLinkTo(email), 'test'));
	expect(refusal.kind).toBe('conflict');
	await expect(trySignIn(person)).resolves.toBeDefined();
});

test('housekeeping deletes what has lapsed and leaves the rest', async () => {
	const person = await makePerson();
	const [old, young] = [await signedIn(person), await signedIn(person)];
	await newPasswordLink(person);
	await adminQuery(
		`update session set expires_at = now() - interval '1 minute'
		where user_id = $1 and created_at = (select min(created_at) from session where user_id = $1)`,
		[person.userId]
	);
	await adminQuery(
		`update user_token set expires_at = now() - interval '2 days' where user_id = $1`,
		[person.userId]
	);
	await deleteExpired();
	const left = async (table: string) =>
		(await adminQuery(`select 1 from ${table} where user_id = $1`, [person.userId])).length;
	expect(await left('session')).toBe(1);
	expect(await left('user_token')).toBe(0);
	expect(await readSession(old.sessionId)).toBeNull();
	expect(await readSession(young.sessionId)).not.toBeNull();
});
