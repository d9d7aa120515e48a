import { beforeAll, expect, test } from 'vitest';
import { readTrail, type TrailFilter } from '../../../src/lib/server/audit/trail.ts';
import { inTenant } from '../../../src/lib/server/db/transaction.ts';
import {
	changeRole,
	invite,
	listMembers,
	removeMember
} from '../../../src/lib/server/operators/members.ts';
import { changeOperator } from '../../../src/lib/server/operators/operators.ts';
import { adminQuery, refusalCode, withDatabase } from '../../support/database.ts';
import {
	asMember,
	makeMember,
	makeOperator,
	newAddress,
	type Operator
} from '../../support/people.ts';
import { refusalOf } from '../../support/refusals.ts';

let operator: Operator;
beforeAll(async () => {
	operator = await makeOperator('Trail Terrace');
	const person = await makeMember(operator, 'planner', 'Pia Planner');
	const members = await asMember(operator, operator.owner, 'owner', async (tx) => listMembers(tx));
	const memberId = members.find((one) => one.userId === person.userId)?.memberId ?? '';
	await asMember(operator, operator.owner, 'owner', (tx) =>
		changeRole(tx, { memberId, role: 'steward' })
	);
	await asMember(operator, operator.owner, 'owner', (tx) =>
		changeOperator(tx, { name: 'Trail Terrace East', requireSecondStep: false })
	);
	await asMember(operator, operator.owner, 'owner', (tx) => removeMember(tx, memberId));
});

const read = (filter: Partial<TrailFilter> = {}) =>
	asMember(operator, operator.owner, 'owner', (tx) => readTrail(tx, { most: 50, ...filter }));
const actions = async (filter: Partial<TrailFilter> = {}) =>
	(await read(filter)).rows.map((row) => row.action);

test('it says who did what, when, from what to what, and by which request', async () => {
	const { rows } = await read();
	expect(rows.map((row) => row.action)).toEqual([
		'member.removed',
		'operator.changed',
		'member.role_changed',
		'member.joined',
		'member.invited',
		'operator.opened'
	]);
	const changed = rows.find((row) => row.action === 'member.role_changed');
	expect(changed).toMatchObject({
		actorKind: 'member',
		actorName: 'Oda Owner',
		actorUserId: operator.owner.userId,
		before: { role: 'planner' },
		after: { role: 'steward' }
	});
	expect(changed?.requestId).toMatch(/^[0-9a-f-]{36}$/);
	expect(Math.abs(Date.now() - (changed?.at.getTime() ?? 0))).toBeLessThan(60_000);
	expect(rows.find((row) => row.action === 'member.joined')?.actorName).toBe('Pia Planner');
});

test('it is filtered by person, by kind of act and by time', async () => {
	expect(await actions({ who: 'pia' })).toEqual(['member.joined']);
	expect(await actions({ what: 'operator' })).toEqual(['operator.changed', 'operator.opened']);
	expect(await actions({ who: '%' })).toEqual([]);
	const newest = (await read()).rows[0]?.at ?? new Date();
	expect(await actions({ from: new Date(newest.getTime() + 1) })).toEqual([]);
	expect(await actions({ to: newest })).not.toContain('member.removed');
});

test('it is read page by page without a gap or a repeat', async () => {
	const all = (await read()).rows.map((row) => row.id);
	const paged: string[] = [];
	let after: string | null = null;
	do {
		const page: Awaited<ReturnType<typeof read>> = await read({
			most: 2,
			...(after ? { after } : {})
		});
		paged.push(...page.rows.map((row) => row.id));
		after = page.next;
	} while (after);
	expect(paged).toEqual(all);
});

test('the application can add to it and neither change nor delete', async () => {
	await withDatabase('app', async (client) => {
		for (const statement of [
			`update trail set actor_name = 'Somebody else'`,
			'delete from trail',
			'truncate trail'
		]) {
			await client.query('begin');
			await client.query(`select set_config('app.operator_id', $1, true)`, [operator.operatorId]);
			expect(await refusalCode(client.query(statement)), statement).toBe('42501');
			await client.query('rollback');
		}
	});
});

test('an act that fails leaves no trace, and one that leaves a trace was done', async () => {
	const before = (await read()).rows.length;
	const memberId = '00000000-0000-7000-8000-000000000000';
	await refusalOf(
		asMember(operator, operator.owner, 'owner', (tx) => changeRole(tx, { memberId, role: 'owner' }))
	);
	const email = newAddress();
	const actor = { kind: 'member', role: 'owner', ...operator.owner } as const;
	const undone = inTenant(operator.operatorId, { actor }, async (tx) => {
		await invite(tx, { email, role: 'planner' });
		throw new Error('the end of it failed');
	});
	await expect(undone).rejects.toThrow('the end of it failed');
	expect((await read()).rows).toHaveLength(before);
	expect(await adminQuery('select 1 from letter where to_address = $1', [email])).toEqual([]);
});

test('another operator’s owner reads none of it', async () => {
	const other = await makeOperator();
	const page = await asMember(other, other.owner, 'owner', (tx) => readTrail(tx, { most: 200 }));
	expect(page.rows.map((row) => row.action)).toEqual(['operator.opened']);
});
