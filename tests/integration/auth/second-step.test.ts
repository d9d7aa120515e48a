import { Secret, TOTP } from 'otpauth';
import { expect, test } from 'vitest';
import {
	newSecondStepSecret,
	passSecondStep,
	recoveryCodesLeft,
	startSecondStep,
	stopSecondStep
} from '../../../src/lib/server/auth/second-step.ts';
import { readSession } from '../../../src/lib/server/auth/sessions.ts';
import { inPerson, type PlainTx } from '../../../src/lib/server/db/transaction.ts';
import { adminQuery } from '../../support/database.ts';
import { makePerson, trySignIn, type Person } from '../../support/people.ts';
import { refusalOf } from '../../support/refusals.ts';

const inAccountOf = <T>(person: Person, run: (tx: PlainTx) => Promise<T>) =>
	inPerson(person.userId, { actor: { kind: 'person', ...person } }, run);

const digits = (secret: string, stepsAhead = 0) =>
	new TOTP({ secret: Secret.fromBase32(secret) }).generate({
		timestamp: Date.now() + stepsAhead * 30_000
	});

interface WithSecondStep extends Person {
	secret: string;
	recoveryCodes: string[];
	sessionId: string;
}

async function makeWithSecondStep(): Promise<WithSecondStep> {
	const person = await makePerson();
	const before = (await trySignIn(person)).cookie.value;
	const { secret } = newSecondStepSecret(person.email);
	const { recoveryCodes, cookie } = await inAccountOf(person, (tx) =>
		startSecondStep(
			tx,
			{ ...person, sessionId: before, userAgent: '' },
			{ secret, code: digits(secret) }
		)
	);
	expect(await readSession(before)).toBeNull();
	return { ...person, secret, recoveryCodes, sessionId: cookie.value };
}

const pass = (person: Person, sessionId: string, code: string) =>
	inAccountOf(person, (tx) => passSecondStep(tx, { ...person, sessionId, userAgent: '' }, code));

test('turning it on wants a code of the key itself, and gives the session a new id', async () => {
	const person = await makePerson();
	const { secret } = newSecondStepSecret(person.email);
	const other = newSecondStepSecret(person.email).secret;
	const start = (code: string) =>
		inAccountOf(person, (tx) =>
			startSecondStep(tx, { ...person, sessionId: 'none', userAgent: '' }, { secret, code })
		);
	const refusal = await refusalOf(start(digits(other)));
	expect([refusal.kind, refusal.field]).toEqual(['invalid', 'code']);
	const { recoveryCodes, cookie } = await start(digits(secret));
	expect(new Set(recoveryCodes).size).toBe(10);
	expect((await readSession(cookie.value))?.session.secondStepPassed).toBe(true);
	expect((await refusalOf(start(digits(secret, 1)))).kind).toBe('conflict');
	const [row] = await adminQuery<{ sealed: string }>(
		'select totp_secret_sealed as sealed from "user" where id = $1',
		[person.userId]
	);
	expect(row?.sealed).not.toContain(secret);
});

test('the password alone opens half a session; the code makes a whole one with a new id', async () => {
	const person = await makeWithSecondStep();
	const { cookie, secondStepNeeded } = await trySignIn(person);
	expect(secondStepNeeded).toBe(true);
	expect((await readSession(cookie.value))?.session.secondStepPassed).toBe(false);
	const whole = await pass(person, cookie.value, digits(person.secret, 1));
	expect(whole.value).not.toBe(cookie.value);
	expect(await readSession(cookie.value)).toBeNull();
	expect((await readSession(whole.value))?.session.secondStepPassed).toBe(true);
});

test('a code that was used is refused, and so is an older one', async () => {
	const person = await makeWithSecondStep();
	const next = digits(person.secret, 1);
	const first = (await trySignIn(person)).cookie.value;
	// The code of this moment turned the second step on.
	expect((await refusalOf(pass(person, first, digits(person.secret)))).kind).toBe('invalid');
	await pass(person, first, next);
	const second = (await trySignIn(person)).cookie.value;
	expect((await refusalOf(pass(person, second, next))).kind).toBe('invalid');
	expect((await refusalOf(pass(person, second, digits(person.secret, -1)))).kind).toBe('invalid');
});

test('one code used twice at the same time opens one session', async () => {
	const person = await makeWithSecondStep();
	const code = digits(person.secret, 1);
	const sessions = [await trySignIn(person), await trySignIn(person)];
	const both = await Promise.allSettled(
		sessions.map(({ cookie }) => pass(person, cookie.value, code))
	);
	expect(both.map((one) => one.status).sort()).toEqual(['fulfilled', 'rejected']);
});

test('a recovery code opens one session, once, however it is typed', async () => {
	const person = await makeWithSecondStep();
	const code = (person.recoveryCodes[3] ?? '').replaceAll('-', '').toLowerCase();
	const first = (await trySignIn(person)).cookie.value;
	await pass(person, first, code);
	const second = (await trySignIn(person)).cookie.value;
	expect((await refusalOf(pass(person, second, code))).kind).toBe('invalid');
	expect(await inAccountOf(person, (tx) => recoveryCodesLeft(tx, person.userId))).toBe(9);
	// Another person's code is nothing here.
	const other = await makeWithSecondStep();
	const theirs = (other.recoveryCodes[0] ?? '').replaceAll('-', '');
	expect((await refusalOf(pass(person, second, theirs))).kind).toBe('invalid');
});

test('wrong codes close the account as wrong passwords do, also all at once', async () => {
	const person = await makeWithSecondStep();
	const { cookie } = await trySignIn(person);
	const burst = Array.from({ length: 20 }, (_, i) =>
		refusalOf(pass(person, cookie.value, `A234567AAAAAAA${String.fromCharCode(65 + i)}A`))
	);
	const kinds = (await Promise.all(burst)).map(({ kind }) => kind);
	expect(kinds.filter((kind) => kind === 'invalid').length).toBeLessThanOrEqual(8);
	const right = pass(person, cookie.value, digits(person.secret, 1));
	expect((await refusalOf(right)).status).toBe(429);
	expect((await refusalOf(trySignIn(person))).status).toBe(429);
});

test('the password of an account with a second step does not forget wrong codes', async () => {
	const person = await makeWithSecondStep();
	for (let i = 0; i < 8; i++) {
		const { cookie } = await trySignIn(person);
		await refusalOf(pass(person, cookie.value, '000000'));
	}
	expect((await refusalOf(trySignIn(person))).status).toBe(429);
});

test('more people at once than there are connections all get in', async () => {
	const people = await Promise.all(Array.from({ length: 16 }, makeWithSecondStep));
	const cookies = await Promise.all(people.map((person) => trySignIn(person)));
	const began = performance.now();
	await Promise.all(
		people.map((person, i) =>
			pass(person, cookies[i]?.cookie.value ?? '', digits(person.secret, 1))
		)
	);
	// Waiting for each other they would run into the pool's patience of five seconds.
	expect(performance.now() - began).toBeLessThan(4_000);
});

test('turning it off takes key and recovery codes away', async () => {
	const person = await makeWithSecondStep();
	await inAccountOf(person, (tx) => stopSecondStep(tx, person.userId));
	expect((await trySignIn(person)).secondStepNeeded).toBe(false);
	const left = await adminQuery('select 1 from recovery_code where user_id = $1', [person.userId]);
	expect(left).toEqual([]);
});
