import { afterEach, expect, test, vi } from 'vitest';
import { countAttempt } from '../../../src/lib/server/auth/limits.ts';
import { passwordFits } from '../../../src/lib/server/auth/passwords.ts';
import {
	endAllSessions,
	listSessions,
	readSession
} from '../../../src/lib/server/auth/sessions.ts';
import { inPerson } from '../../../src/lib/server/db/transaction.ts';
import { adminQuery } from '../../support/database.ts';
import {
	makePerson,
	newAddress,
	newRequest,
	trySignIn,
	type Person
} from '../../support/people.ts';
import { refusalOf } from '../../support/refusals.ts';

afterEach(() => vi.resetModules());

const wrong = (person: { email: string }) => ({
	email: person.email,
	password: 'not the password'
});

const inAccountOf = <T>(person: Person, run: Parameters<typeof inPerson<T>>[2]) =>
	inPerson(person.userId, { actor: { kind: 'person', ...person } }, run);

test('the right password opens a session whose cookie is closed to scripts and other sites', async () => {
	const person = await makePerson();
	const { cookie, secondStepNeeded } = await trySignIn(person);
	expect(secondStepNeeded).toBe(false);
	expect(cookie.attributes).toMatchObject({ httpOnly: true, sameSite: 'lax', path: '/' });
	const found = await readSession(cookie.value);
	expect(found?.user.id).toBe(person.userId);
	// Who reads the database can not sign in with what lies there.
	const stored = await adminQuery<{ id: string }>('select id from session where user_id = $1', [
		person.userId
	]);
	expect(stored.map(({ id }) => id)).not.toContain(cookie.value);
});

test('a wrong password and an unknown address get the same answer', async () => {
	const person = await makePerson();
	const answers = await Promise.all([
		refusalOf(trySignIn(wrong(person))),
		refusalOf(trySignIn(wrong({ email: newAddress() })))
	]);
	const told = answers.map(({ kind, message, field }) => ({ kind, message, field }));
	expect(told[0]).toEqual(told[1]);
	expect(told[0]?.kind).toBe('invalid');
});

test('an unknown address costs the same work as a wrong password', async () => {
	const [row] = await adminQuery<{ hash: string }>(
		'select password_hash as hash from "user" where id = $1',
		[(await makePerson()).userId]
	);
	const median = async (stored: string | null) => {
		const times: number[] = [];
		for (let i = 0; i < 5; i++) {
			const began = performance.now();
			expect(await passwordFits(stored, 'not the password')).toBe(false);
			times.push(performance.now() - began);
		}
		return times.sort((a, b) => a - b)[2] ?? 0;
	};
	await median(null);
	expect(await median(null)).toBeGreaterThan(0.3 * (await median(row?.hash ?? '')));
});

test('after eight wrong passwords an account is closed for a while, whoever asks and with whatever', async () => {
	const person = await makePerson();
	for (let i = 0; i < 8; i++) {
		expect((await refusalOf(trySignIn(wrong(person)))).kind).toBe('invalid');
	}
	const refusal = await refusalOf(trySignIn(person));
	expect(refusal.status).toBe(429);
	expect(refusal.message).toMatch(/Try again in \d+ minutes/);
	// Other accounts are not touched.
	await expect(trySignIn(await makePerson())).resolves.toBeDefined();
	// The count is in PostgreSQL: a process that has just started knows of it.
	vi.resetModules();
	const fresh = await import('../../../src/lib/server/auth/sign-in.ts');
	await expect(fresh.signIn({ ...newRequest(), ...person })).rejects.toMatchObject({
		kind: 'too_many'
	});
	await (await import('../../../src/lib/server/db/client.ts')).closePool();
});

test('an account that does not exist is closed in the same way', async () => {
	const nobody = { email: newAddress(), password: 'not the password' };
	for (let i = 0; i < 8; i++) await refusalOf(trySignIn(nobody));
	expect((await refusalOf(trySignIn(nobody))).status).toBe(429);
});

test('a success forgets the wrong tries before it', async () => {
	const person = await makePerson();
	for (let round = 0; round < 2; round++) {
		for (let i = 0; i < 6; i++) await refusalOf(trySignIn(wrong(person)));
		await trySignIn(person);
	}
});

test('guesses that come all at once are no more than those that come one by one', async () => {
	const person = await makePerson();
	const burst = Array.from({ length: 24 }, () => refusalOf(trySignIn(wrong(person))));
	const right = trySignIn(person).catch((error: Error) => error);
	const kinds = (await Promise.all(burst)).map(({ kind }) => kind);
	expect(kinds.filter((kind) => kind === 'invalid').length).toBeLessThanOrEqual(8);
	// The right one was among more than eight: it must not have been looked at.
	expect(await right).toMatchObject({ kind: 'too_many' });
});

test('many wrong tries from one address close it, for every account', async () => {
	const address = `test ${crypto.randomUUID()}`;
	for (let i = 0; i < 59; i++) await countAttempt('signInAddress', address);
	await refusalOf(trySignIn(wrong({ email: newAddress() }), { address }));
	const person = await makePerson();
	expect((await refusalOf(trySignIn(person, { address }))).status).toBe(429);
	await expect(trySignIn(person)).resolves.toBeDefined();
});

test('signing in from one address does not use up its tries', async () => {
	const address = `test ${crypto.randomUUID()}`;
	const person = await makePerson();
	for (let i = 0; i < 58; i++) await countAttempt('signInAddress', address);
	for (let i = 0; i < 4; i++) await trySignIn(person, { address });
});

test('signing in again ends the session that the browser had', async () => {
	const person = await makePerson();
	const first = (await trySignIn(person)).cookie.value;
	const second = (await trySignIn(person, { presentSessionId: first })).cookie.value;
	expect(second).not.toBe(first);
	expect(await readSession(first)).toBeNull();
	expect(await readSession(second)).not.toBeNull();
});

test('a session that is over or unknown is nobody’s', async () => {
	const person = await makePerson();
	const { value } = (await trySignIn(person)).cookie;
	await adminQuery(
		`update session set expires_at = now() - interval '1 second' where user_id = $1`,
		[person.userId]
	);
	expect(await readSession(value)).toBeNull();
	expect(await readSession('no such session')).toBeNull();
});

test('signing out everywhere ends every session of the person and none of another', async () => {
	const [person, other] = [await makePerson(), await makePerson()];
	const theirs = (await trySignIn(other)).cookie.value;
	const cookies = [await trySignIn(person), await trySignIn(person)].map((one) => one.cookie.value);
	const listed = await inAccountOf(person, (tx) =>
		listSessions(tx, person.userId, cookies[0] ?? '')
	);
	expect(listed.map((one) => one.current).sort()).toEqual([false, true]);
	await inAccountOf(person, (tx) => endAllSessions(tx, person.userId));
	for (const value of cookies) expect(await readSession(value)).toBeNull();
	expect(await readSession(theirs)).not.toBeNull();
});
