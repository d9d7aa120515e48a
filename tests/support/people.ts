import { v7 as uuidv7 } from 'uuid';
import { hashPassword } from '../../src/lib/server/auth/passwords.ts';
import { openAccount } from '../../src/lib/server/auth/account.ts';
import { signIn, type SignInAttempt } from '../../src/lib/server/auth/sign-in.ts';
import type { Role } from '../../src/lib/server/db/schema/operators.ts';
import { inPublic, inTenant, type TenantTx } from '../../src/lib/server/db/transaction.ts';
import { acceptInvitation, invite } from '../../src/lib/server/operators/members.ts';
import { openOperator } from '../../src/lib/server/operators/operators.ts';

export interface Person {
	userId: string;
	name: string;
	email: string;
	password: string;
}

export interface Operator {
	operatorId: string;
	slug: string;
	owner: Person;
}

export const PASSWORD = 'mist over the quarry';

// Made once a file: the hash is meant to be slow.
let passwordHash: Promise<string> | undefined;

/** An address that nobody else has. */
export function newAddress(): string {
	return `${crypto.randomUUID()}@example.org`;
}

/** Where a request of a test comes from: an address and an id of its own, so that limits stay apart. */
export function newRequest(): { address: string; requestId: string; userAgent: string } {
	const id = crypto.randomUUID();
	return { address: `test ${id}`, requestId: id, userAgent: 'test browser' };
}

/** A person with an account and no role anywhere. */
export async function makePerson(name = 'Juno Fell'): Promise<Person> {
	passwordHash ??= hashPassword(PASSWORD);
	const account = { email: newAddress(), name, passwordHash: await passwordHash };
	const actor = { kind: 'visitor', name: 'test' } as const;
	const made = await inPublic({ actor }, (tx) => openAccount(tx, account));
	if (!made) throw new Error('The address was taken.');
	return { ...made, email: account.email, password: PASSWORD };
}

/** An operator with an owner. */
export async function makeOperator(name = `Test Mist Gardens ${uuidv7()}`): Promise<Operator> {
	const owner = await makePerson('Oda Owner');
	const { id, slug } = await openOperator(owner, name, null);
	return { operatorId: id, slug, owner };
}

/** A new person with a role at an operator, invited by its owner. */
export async function makeMember(operator: Operator, role: Role, name?: string): Promise<Person> {
	const person = await makePerson(name ?? `Test ${role}`);
	await join(operator, person, role);
	return person;
}

/** Gives a person a role at an operator, by an invitation of its owner. */
export async function join(operator: Operator, person: Person, role: Role): Promise<void> {
	const link = await asMember(operator, operator.owner, 'owner', (tx) =>
		invite(tx, { email: person.email, role })
	);
	await acceptInvitation(link, person, newRequest().requestId);
}

/** Runs a service inside an operator, as one of its members. */
export function asMember<T>(
	operator: Pick<Operator, 'operatorId'>,
	person: Person,
	role: Role,
	run: (tx: TenantTx) => Promise<T>
): Promise<T> {
	const actor = { kind: 'member', userId: person.userId, name: person.name, role } as const;
	return inTenant(operator.operatorId, { actor, requestId: newRequest().requestId }, run);
}

/** Tries to sign in, from an address of its own unless one is given. */
export function trySignIn(
	person: { email: string; password: string },
	more: Partial<SignInAttempt> = {}
): ReturnType<typeof signIn> {
	const { email, password } = person;
	return signIn({ ...newRequest(), email, password, ...more });
}
