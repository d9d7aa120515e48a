import { randomBytes } from 'node:crypto';
import { hashPassword } from '../auth/passwords';
import { openAccount } from '../auth/account';
import type { Role } from '../db/schema/operators';
import { inPublic, inTenant } from '../db/transaction';
import { acceptInvitation, invite, openInvitedAccount } from '../operators/members';
import { openOperator } from '../operators/operators';

/** A demo sign-in, as the start command prints it. */
export interface DemoSignIn {
	role: string;
	email: string;
	password: string;
	note: string;
}

const staff: { role: Role; name: string; email: string; note: string }[] = [
	{ role: 'planner', name: 'Orla Venn', email: 'orla@hollin.example.org', note: 'sites, slots' },
	{ role: 'box_office', name: 'Tibor Lund', email: 'tibor@hollin.example.org', note: 'orders' },
	{ role: 'steward', name: 'Asa Brook', email: 'asa@hollin.example.org', note: 'the gate' },
	{ role: 'bookkeeper', name: 'Ines Marlow', email: 'ines@hollin.example.org', note: 'money' }
];

/**
 * Makes the invented operator of the demo, with a member for each role, by the same services that the
 * screens use. The passwords are made afresh, so that no installation shares one.
 */
export async function makeDemoPeople(): Promise<{
	operatorId: string;
	slug: string;
	owner: { userId: string; name: string };
	signIns: DemoSignIn[];
}> {
	const requestId = 'demo';
	const password = () => randomBytes(9).toString('base64url');
	const ownerPassword = password();
	const passwordHash = await hashPassword(ownerPassword);
	const ownerEmail = 'mara@hollin.example.org';
	const owner = await inPublic({ actor: { kind: 'platform', userId: null, name: 'demo' } }, (tx) =>
		openAccount(tx, { email: ownerEmail, name: 'Mara Hollin', passwordHash })
	);
	if (!owner) throw new Error(`the demo needs ${ownerEmail}, and that account exists`);
	const { id: operatorId, slug } = await openOperator(owner, 'Hollin Mist Gardens', requestId);

	const signIns: DemoSignIn[] = [
		{ role: 'owner', email: ownerEmail, password: ownerPassword, note: 'everything' }
	];
	const actor = { kind: 'member', role: 'owner', ...owner } as const;
	for (const { role, name, email, note } of staff) {
		const given = { name, password: password() };
		const link = await inTenant(operatorId, { actor, requestId }, (tx) =>
			invite(tx, { email, role })
		);
		const person = await openInvitedAccount(link, given, requestId);
		await acceptInvitation(link, person, requestId);
		signIns.push({ role: role.replace('_', ' '), email, password: given.password, note });
	}
	return { operatorId, slug, owner, signIns };
}
