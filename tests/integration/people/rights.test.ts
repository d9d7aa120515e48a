import { beforeAll, expect, test } from 'vitest';
import { readTrail } from '../../../src/lib/server/audit/trail.ts';
import { mayRole, rightsOf, type Right } from '../../../src/lib/server/auth/rights.ts';
import { roles, type Role } from '../../../src/lib/server/db/schema/operators.ts';
import {
	inPerson,
	inPlatform,
	type PlainTx,
	type TenantTx
} from '../../../src/lib/server/db/transaction.ts';
import { listJobs, retryJob } from '../../../src/lib/server/jobs/admin.ts';
import { countComing, readBasis } from '../../../src/lib/server/sites/conflict-basis.ts';
import { demandSlotMove, startSlotMove } from '../../../src/lib/server/booking/move-slot.ts';
import { moveOrder } from '../../../src/lib/server/booking/move.ts';
import { listLetters } from '../../../src/lib/server/mail/read.ts';
import {
	changeRole,
	invite,
	listInvitations,
	listMembers,
	removeMember,
	withdrawInvitation
} from '../../../src/lib/server/operators/members.ts';
import {
	changeOperator,
	listMemberships,
	findMembership,
	listOperators,
	setOperatorStatus
} from '../../../src/lib/server/operators/operators.ts';
import {
	asMember,
	makeMember,
	makeOperator,
	makePerson,
	newAddress,
	type Operator,
	type Person
} from '../../support/people.ts';
import { refusalOf } from '../../support/refusals.ts';

const NOBODY = '00000000-0000-7000-8000-000000000000';

/** The services of an operator, and the right that each asks for. Add new ones here. */
const SERVICES: [name: string, right: Right, run: (tx: TenantTx) => Promise<unknown>][] = [
	['listMembers', 'members.manage', async (tx) => listMembers(tx)],
	['listInvitations', 'members.manage', async (tx) => listInvitations(tx)],
	['invite', 'members.manage', (tx) => invite(tx, { email: newAddress(), role: 'planner' })],
	['withdrawInvitation', 'members.manage', (tx) => withdrawInvitation(tx, NOBODY)],
	['changeRole', 'members.manage', (tx) => changeRole(tx, { memberId: NOBODY, role: 'owner' })],
	['removeMember', 'members.manage', (tx) => removeMember(tx, NOBODY)],
	[
		'changeOperator',
		'operator.settings',
		(tx) => changeOperator(tx, { name: 'Renamed', requireSecondStep: false })
	],
	[
		'moveOrder',
		'orders.move',
		(tx) =>
			moveOrder(tx, NOBODY, NOBODY, { moveId: NOBODY, wishedBy: 'visitor', words: '' }, new Date())
	],
	[
		'startSlotMove',
		'conflicts.decide',
		(tx) => startSlotMove(tx, { fromSlotId: NOBODY, toSlotId: NOBODY, words: '' }, new Date())
	],
	['demandSlotMove', 'orders.read', (tx) => demandSlotMove(tx, NOBODY)],
	['countComing', 'conflicts.decide', (tx) => countComing(tx, 'nowhere', new Date())],
	[
		'readBasis',
		'conflicts.decide',
		(tx) => readBasis(tx, { slug: 'nowhere', version: null }, new Date())
	],
	['readTrail', 'trail.read', (tx) => readTrail(tx, { most: 5 })],
	['listLetters', 'letters.read', (tx) => listLetters(tx, { most: 5 })]
];

let operator: Operator;
const people = new Map<Role, Person>();
beforeAll(async () => {
	operator = await makeOperator();
	for (const role of roles) {
		people.set(role, role === 'owner' ? operator.owner : await makeMember(operator, role));
	}
});

const as = <T>(role: Role, run: (tx: TenantTx) => Promise<T>) =>
	asMember(operator, people.get(role) ?? operator.owner, role, run);

test.each(SERVICES)('%s asks for the right %s, of every role', async (_, right, run) => {
	for (const role of roles) {
		const outcome = await as(role, run).then(
			() => 'done',
			(error: { kind?: string }) => error.kind
		);
		// What is looked for may be missing; that is said only to those who may look.
		const expected = mayRole(role, right) ? ['done', 'not_found'] : ['forbidden'];
		expect(expected, role).toContain(outcome);
	}
});

test('the table of rights is that of the product', () => {
	const money: Right[] = ['money.read', 'money.settings'];
	expect(rightsOf('steward').filter((right) => money.includes(right))).toEqual([]);
	expect(rightsOf('steward')).not.toContain('orders.read');
	expect(rightsOf('steward')).not.toContain('letters.read');
	expect(rightsOf('steward')).toContain('gate.use');
	expect(rightsOf('bookkeeper')).toEqual(expect.arrayContaining(['money.read', 'orders.read']));
	expect(rightsOf('bookkeeper')).not.toContain('orders.write');
	expect(rightsOf('planner')).toEqual(
		expect.arrayContaining(['sites.write', 'programmes.write', 'weather.decide'])
	);
	expect(rightsOf('box_office')).toContain('orders.write');
	for (const role of roles.filter((one) => one !== 'owner')) {
		for (const right of ['members.manage', 'operator.settings', 'trail.read'] as const) {
			expect(mayRole(role, right), `${role} ${right}`).toBe(false);
		}
	}
	expect(rightsOf('owner').length).toBeGreaterThan(rightsOf('planner').length);
});

test.each<[string, (tx: PlainTx) => Promise<unknown>]>([
	['listOperators', (tx) => listOperators(tx, { search: '', most: 1, skip: 0 })],
	['setOperatorStatus', (tx) => setOperatorStatus(tx, operator.operatorId, 'for a test')],
	['listJobs', (tx) => listJobs(tx, { onlyFailed: false, most: 1, skip: 0 })],
	['retryJob', (tx) => retryJob(tx, '1')]
])('%s is for the platform administration alone', async (_, run) => {
	const { userId, name } = operator.owner;
	for (const open of [inPlatform, inPerson.bind(null, userId)]) {
		const attempt = open({ actor: { kind: 'person', userId, name } }, run);
		expect((await refusalOf(attempt)).kind).toBe('forbidden');
	}
});

test('a person sees their own operators and learns nothing of any other', async () => {
	const person = await makePerson();
	const other = await makeOperator();
	const actor = { kind: 'person', userId: person.userId, name: person.name } as const;
	const look = () =>
		inPerson(person.userId, { actor }, async (tx) => ({
			all: await listMemberships(tx, person.userId),
			one: await findMembership(tx, person.userId, other.slug),
			// Asking in another person's name is of no use: the rows are not there.
			theirs: await listMemberships(tx, other.owner.userId)
		}));
	expect(await look()).toEqual({ all: [], one: null, theirs: [] });
});

test('the platform suspends an operator with a reason and opens it again', async () => {
	const suspended = await makeOperator();
	const platform = { actor: { kind: 'platform', userId: null, name: 'test' } } as const;
	const find = () =>
		inPlatform(platform, (tx) => listOperators(tx, { search: '', most: 10_000, skip: 0 })).then(
			({ rows }) => rows.find((row) => row.id === suspended.operatorId)
		);
	await inPlatform(platform, (tx) => setOperatorStatus(tx, suspended.operatorId, 'unpaid'));
	expect(await find()).toMatchObject({ status: 'suspended', suspendedReason: 'unpaid' });
	await inPlatform(platform, (tx) => setOperatorStatus(tx, suspended.operatorId, null));
	expect(await find()).toMatchObject({ status: 'open', suspendedReason: null });
});

test('the search for operators takes its signs literally', async () => {
	const name = `50%_off ${crypto.randomUUID()}`;
	await makeOperator(name);
	const platform = { actor: { kind: 'platform', userId: null, name: 'test' } } as const;
	const search = (text: string) =>
		inPlatform(platform, (tx) => listOperators(tx, { search: text, most: 50, skip: 0 }));
	expect((await search('50%_OFF')).total).toBe(1);
	expect((await search('50__off')).total).toBe(0);
});
