import { describe, expect, test } from 'vitest';
import {
	acceptInvitation,
	changeRole,
	findInvitation,
	invite,
	leaveOperator,
	listInvitations,
	listMembers,
	openInvitedAccount,
	removeMember,
	withdrawInvitation
} from '../../../src/lib/server/operators/members.ts';
import type { TenantTx } from '../../../src/lib/server/db/transaction.ts';
import { adminQuery } from '../../support/database.ts';
import { lettersTo } from '../../support/letters.ts';
import {
	asMember,
	join,
	makeMember,
	makeOperator,
	makePerson,
	newAddress,
	PASSWORD,
	trySignIn,
	type Operator,
	type Person
} from '../../support/people.ts';
import { refusalOf } from '../../support/refusals.ts';

const asOwner = <T>(operator: Operator, run: Parameters<typeof asMember<T>>[3]) =>
	asMember(operator, operator.owner, 'owner', run);

async function memberIdOf(operator: Operator, person: Person): Promise<string> {
	const members = await asOwner(operator, listMembers);
	const found = members.find((one) => one.userId === person.userId);
	if (!found) throw new Error('no such member');
	return found.memberId;
}

async function ownersOf(operator: Operator): Promise<number> {
	const rows = await adminQuery(`select 1 from member where operator_id = $1 and role = 'owner'`, [
		operator.operatorId
	]);
	return rows.length;
}

describe('the last owner', () => {
	test('can not leave, be removed or be given another role', async () => {
		const operator = await makeOperator();
		const memberId = await memberIdOf(operator, operator.owner);
		for (const attempt of [
			leaveOperator,
			(tx: TenantTx) => removeMember(tx, memberId),
			(tx: TenantTx) => changeRole(tx, { memberId, role: 'planner' })
		]) {
			const refusal = await refusalOf(asOwner(operator, attempt));
			expect([refusal.kind, refusal.message]).toEqual([
				'conflict',
				expect.stringContaining('at least one owner')
			]);
		}
		expect(await ownersOf(operator)).toBe(1);
	});

	test('can go once there is another', async () => {
		const operator = await makeOperator();
		await makeMember(operator, 'owner');
		await asOwner(operator, leaveOperator);
		expect(await ownersOf(operator)).toBe(1);
	});

	test('is kept when two owners leave, or remove each other, at the same time', async () => {
		for (let round = 0; round < 5; round++) {
			const operator = await makeOperator();
			const second = await makeMember(operator, 'owner');
			const ids = [await memberIdOf(operator, operator.owner), await memberIdOf(operator, second)];
			const outcomes = await Promise.allSettled(
				round % 2 === 0
					? [asOwner(operator, leaveOperator), asMember(operator, second, 'owner', leaveOperator)]
					: [
							asOwner(operator, (tx) => removeMember(tx, ids[1] ?? '')),
							asMember(operator, second, 'owner', (tx) => removeMember(tx, ids[0] ?? ''))
						]
			);
			expect(outcomes.map((one) => one.status).sort()).toEqual(['fulfilled', 'rejected']);
			expect(await ownersOf(operator)).toBe(1);
		}
	});
});

describe('an invitation', () => {
	test('makes a member in the role it names, and tells the invited by letter', async () => {
		const operator = await makeOperator('Quarry Bow');
		const person = await makePerson();
		await join(operator, person, 'steward');
		const members = await asOwner(operator, listMembers);
		expect(members).toContainEqual(
			expect.objectContaining({ userId: person.userId, role: 'steward', email: person.email })
		);
		const [letter] = await lettersTo(person.email);
		expect(letter?.operatorId).toBe(operator.operatorId);
		expect(letter?.subject).toBe('Join Quarry Bow at Bowkeeper');
		expect(letter?.text).toContain('in the role of steward');
	});

	test('makes an account for somebody who has none, at the invited address', async () => {
		const operator = await makeOperator();
		const email = newAddress();
		const link = await asOwner(operator, (tx) => invite(tx, { email, role: 'planner' }));
		expect(await findInvitation(link)).toMatchObject({ email, hasAccount: false });
		const person = await openInvitedAccount(link, { name: 'New', password: PASSWORD }, 'test');
		await acceptInvitation(link, person, 'test');
		await expect(trySignIn({ email, password: PASSWORD })).resolves.toBeDefined();
		expect(
			(await refusalOf(openInvitedAccount(link, { name: 'X', password: PASSWORD }, 't'))).kind
		).toBe('not_found');
	});

	test('opens no second account where there is one by now', async () => {
		const operator = await makeOperator();
		const person = await makePerson();
		const link = await asOwner(operator, (tx) =>
			invite(tx, { email: person.email, role: 'planner' })
		);
		expect(await findInvitation(link)).toMatchObject({ hasAccount: true });
		const again = openInvitedAccount(link, { name: 'Other', password: PASSWORD }, 'test');
		expect((await refusalOf(again)).kind).toBe('conflict');
	});

	test('is accepted once, by two at the same time as well', async () => {
		const operator = await makeOperator();
		const people = [await makePerson(), await makePerson()];
		const link = await asOwner(operator, (tx) =>
			invite(tx, { email: people[0]?.email ?? '', role: 'planner' })
		);
		const both = await Promise.allSettled(
			people.map((person) => acceptInvitation(link, person, 'test'))
		);
		expect(both.map((one) => one.status).sort()).toEqual(['fulfilled', 'rejected']);
		expect((await refusalOf(acceptInvitation(link, await makePerson(), 'test'))).kind).toBe(
			'not_found'
		);
	});

	test('is not used up by somebody who is a member already', async () => {
		const operator = await makeOperator();
		const person = await makePerson();
		const link = await asOwner(operator, (tx) =>
			invite(tx, { email: person.email, role: 'planner' })
		);
		expect((await refusalOf(acceptInvitation(link, operator.owner, 'test'))).kind).toBe('conflict');
		await acceptInvitation(link, person, 'test');
	});

	test('can not be accepted when it has lapsed or was withdrawn or replaced', async () => {
		const operator = await makeOperator();
		const email = newAddress();
		const inviteAgain = () => asOwner(operator, (tx) => invite(tx, { email, role: 'planner' }));
		const replaced = await inviteAgain();
		const withdrawn = await inviteAgain();
		const [open] = await asOwner(operator, listInvitations);
		await asOwner(operator, (tx) => withdrawInvitation(tx, open?.invitationId ?? ''));
		const lapsed = await inviteAgain();
		await adminQuery(
			`update invitation set expires_at = now() - interval '1 second'
			where operator_id = $1 and withdrawn_at is null`,
			[operator.operatorId]
		);
		const person = await makePerson();
		for (const link of [replaced, withdrawn, lapsed]) {
			expect(await findInvitation(link)).toBeNull();
			expect((await refusalOf(acceptInvitation(link, person, 'test'))).kind).toBe('not_found');
		}
		expect(await asOwner(operator, listInvitations)).toEqual([]);
	});

	test('opens the operator that wrote it and no other', async () => {
		const [operator, other] = [await makeOperator(), await makeOperator()];
		const link = await asOwner(operator, (tx) =>
			invite(tx, { email: newAddress(), role: 'owner' })
		);
		const token = link.slice(link.indexOf('.'));
		const bent = `${other.operatorId}${token}`;
		expect(await findInvitation(bent)).toBeNull();
		expect((await refusalOf(acceptInvitation(bent, await makePerson(), 'test'))).kind).toBe(
			'not_found'
		);
		for (const nonsense of ['', 'x', token, `${operator.operatorId}.`, `' or 1=1.${token}`]) {
			expect(await findInvitation(nonsense)).toBeNull();
		}
	});

	test('is not written to somebody who is a member', async () => {
		const operator = await makeOperator();
		const { email } = operator.owner;
		const refusal = await refusalOf(
			asOwner(operator, (tx) => invite(tx, { email, role: 'planner' }))
		);
		expect([refusal.kind, refusal.field]).toEqual(['conflict', 'email']);
	});

	test('more owners at once than there are connections can invite', async () => {
		const operator = await makeOperator();
		const began = performance.now();
		await Promise.all(
			Array.from({ length: 16 }, () =>
				asOwner(operator, (tx) => invite(tx, { email: newAddress(), role: 'planner' }))
			)
		);
		expect(performance.now() - began).toBeLessThan(4_000);
	});
});

test('the roles of one operator are no matter of another’s owner', async () => {
	const [operator, other] = [await makeOperator(), await makeOperator()];
	const planner = await makeMember(other, 'planner');
	const memberId = await memberIdOf(other, planner);
	for (const attempt of [
		(tx: TenantTx) => removeMember(tx, memberId),
		(tx: TenantTx) => changeRole(tx, { memberId, role: 'owner' })
	]) {
		expect((await refusalOf(asOwner(operator, attempt))).kind).toBe('not_found');
	}
	expect(await ownersOf(other)).toBe(1);
});
