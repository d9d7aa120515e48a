import { and, asc, eq, gt, isNull, sql } from 'drizzle-orm';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { openAccount } from '../auth/account';
import { countAttempt } from '../auth/limits';
import { hashPassword } from '../auth/passwords';
import { hashToken, newToken } from '../auth/tokens';
import { databaseFault } from '../db/errors';
import { invitation, member, operator, user } from '../db/schema';
import type { Role } from '../db/schema/operators';
import { inPublic, inTenant, type TenantTx } from '../db/transaction';
import { env } from '../env';
import { Refusal } from '../failures';
import { writeLetter } from '../mail/outbox';
import { roleNames } from '../../schemas/people';
import { readOperator } from './operators';

const daysValid = 7;
const lapsed = 'This invitation was used, withdrawn, or has lapsed. Ask for a new one.';

/** The operator's members with name, address, role and whether they use a second step. */
export function listMembers(tx: TenantTx) {
	demand(tx, 'members.manage');
	return tx.sql
		.select({
			memberId: member.id,
			userId: user.id,
			name: user.name,
			email: user.email,
			role: member.role,
			secondStepSince: user.secondStepSince,
			since: member.createdAt
		})
		.from(member)
		.innerJoin(user, eq(user.id, member.userId))
		.where(eq(member.operatorId, tx.operatorId))
		.orderBy(asc(user.name));
}

const stillOpen = and(
	isNull(invitation.acceptedAt),
	isNull(invitation.withdrawnAt),
	gt(invitation.expiresAt, sql`now()`)
);

/** Invitations that can still be accepted. */
export function listInvitations(tx: TenantTx) {
	demand(tx, 'members.manage');
	return tx.sql
		.select({
			invitationId: invitation.id,
			email: invitation.email,
			role: invitation.role,
			expiresAt: invitation.expiresAt
		})
		.from(invitation)
		.where(and(eq(invitation.operatorId, tx.operatorId), stillOpen))
		.orderBy(asc(invitation.email));
}

/**
 * Invites somebody by letter. An invitation already open to the address gives way to the new one.
 * @returns the link that the letter carries
 * @throws Refusal at `email` when the person is a member already
 */
export async function invite(
	tx: TenantTx,
	{ email, role }: { email: string; role: Role }
): Promise<string> {
	demand(tx, 'members.manage');
	if (tx.actor.kind !== 'member') throw new Refusal('forbidden', 'Only a member can invite.');
	await countAttempt('letterAccount', `${tx.operatorId} ${email}`);
	const [present] = await tx.sql
		.select({ id: member.id })
		.from(member)
		.innerJoin(user, eq(user.id, member.userId))
		.where(and(eq(member.operatorId, tx.operatorId), eq(user.email, email)));
	if (present) throw new Refusal('conflict', 'This person is a member already.', 'email');

	await tx.sql
		.update(invitation)
		.set({ withdrawnAt: new Date() })
		.where(
			and(
				eq(invitation.email, email),
				isNull(invitation.acceptedAt),
				isNull(invitation.withdrawnAt)
			)
		);
	const { token, hash } = newToken();
	const [made] = await tx.sql
		.insert(invitation)
		.values({
			operatorId: tx.operatorId,
			email,
			role,
			tokenHash: hash,
			invitedBy: tx.actor.userId,
			expiresAt: new Date(Date.now() + daysValid * 86_400_000)
		})
		.returning({ id: invitation.id });
	const { name } = await readOperator(tx);
	await addToTrail(tx, {
		action: 'member.invited',
		subject: { type: 'invitation', ...(made ? { id: made.id } : {}) },
		after: { email, role }
	});
	// The operator's id travels in the link: outside its own transaction its rows can not be seen.
	const link = `${tx.operatorId}.${token}`;
	await writeLetter(tx, {
		kind: 'invitation',
		to: email,
		wipeWhenSent: true,
		content: {
			subject: `Join ${name} at Bowkeeper`,
			greeting: 'Hello,',
			paragraphs: [`${tx.actor.name} invites you to ${name}, in the role of ${roleNames[role]}.`],
			action: {
				label: 'Look at the invitation',
				url: `${env().ORIGIN}/invitation/${link}`
			},
			note: `The link holds for ${daysValid} days and works once. If you do not know ${name}, leave this letter.`,
			from: name
		}
	});
	return link;
}

/** Takes an open invitation back. */
export async function withdrawInvitation(tx: TenantTx, invitationId: string): Promise<void> {
	demand(tx, 'members.manage');
	const changed = await tx.sql
		.update(invitation)
		.set({ withdrawnAt: new Date() })
		.where(and(eq(invitation.id, invitationId), isNull(invitation.acceptedAt)))
		.returning({ email: invitation.email });
	if (!changed[0]) throw new Refusal('not_found', 'There is no such invitation any more.');
	await addToTrail(tx, {
		action: 'member.invitation_withdrawn',
		subject: { type: 'invitation', id: invitationId },
		before: { email: changed[0].email }
	});
}

function splitLink(link: string): { operatorId: string; tokenHash: string } | null {
	const match = /^([0-9a-f]{8}(?:-[0-9a-f]{4}){3}-[0-9a-f]{12})\.([\w-]{20,64})$/.exec(link);
	return match?.[1] && match[2] ? { operatorId: match[1], tokenHash: hashToken(match[2]) } : null;
}

export interface OpenInvitation {
	operatorName: string;
	email: string;
	role: Role;
	/** Whether an account with the invited address exists: its holder signs in to accept. */
	hasAccount: boolean;
}

/** The invitation behind a link; null when it can not be accepted. */
export async function findInvitation(link: string): Promise<OpenInvitation | null> {
	const parts = splitLink(link);
	if (!parts) return null;
	const actor = { kind: 'visitor', name: 'nobody yet' } as const;
	return inTenant(parts.operatorId, { actor }, async (tx) => {
		const [found] = await tx.sql
			.select({
				operatorName: operator.name,
				email: invitation.email,
				role: invitation.role,
				userId: user.id
			})
			.from(invitation)
			.innerJoin(operator, eq(operator.id, invitation.operatorId))
			.leftJoin(user, eq(user.email, invitation.email))
			.where(and(eq(invitation.tokenHash, parts.tokenHash), stillOpen));
		if (!found) return null;
		const { userId, ...rest } = found;
		return { ...rest, hasAccount: userId !== null };
	});
}

/**
 * Accepts an invitation as a person with an account. The link is the proof; the account may have
 * another address than the invited one.
 * @returns the operator's slug
 */
export async function acceptInvitation(
	link: string,
	person: { userId: string; name: string },
	requestId: string
): Promise<string> {
	const parts = splitLink(link);
	if (!parts) throw new Refusal('not_found', lapsed);
	const actor = { kind: 'person', ...person } as const;
	return inTenant(parts.operatorId, { actor, requestId }, async (tx) => {
		const [used] = await tx.sql
			.update(invitation)
			.set({ acceptedAt: new Date() })
			.where(and(eq(invitation.tokenHash, parts.tokenHash), stillOpen))
			.returning();
		if (!used) throw new Refusal('not_found', lapsed);
		const [made] = await tx.sql
			.insert(member)
			.values({ operatorId: tx.operatorId, userId: person.userId, role: used.role })
			.onConflictDoNothing()
			.returning({ id: member.id });
		if (!made) throw new Refusal('conflict', 'You are a member of this operator already.');
		await addToTrail(tx, {
			action: 'member.joined',
			subject: { type: 'member', id: made.id },
			after: { role: used.role }
		});
		return (await readOperator(tx)).slug;
	});
}

/**
 * Makes an account for somebody who was invited and has none: the link proved the address.
 * @throws Refusal when the link lapsed or the address has an account by now
 */
export async function openInvitedAccount(
	link: string,
	given: { name: string; password: string },
	requestId: string
): Promise<{ userId: string; name: string }> {
	const found = await findInvitation(link);
	if (!found) throw new Refusal('not_found', lapsed);
	if (found.hasAccount) {
		throw new Refusal('conflict', 'This address has an account by now. Sign in to accept.');
	}
	const passwordHash = await hashPassword(given.password);
	return inPublic({ actor: { kind: 'visitor', name: given.name }, requestId }, async (tx) => {
		const { email } = found;
		const person = await openAccount(tx, { email, name: given.name, passwordHash });
		if (!person) {
			throw new Refusal('conflict', 'This address has an account by now. Sign in to accept.');
		}
		return person;
	});
}

const lastOwner = 'An operator keeps at least one owner. Make somebody else owner first.';

async function keepingAnOwner<T>(change: () => Promise<T>): Promise<T> {
	try {
		return await change();
	} catch (error) {
		if (databaseFault(error)?.code === 'BK001') throw new Refusal('conflict', lastOwner);
		throw error;
	}
}

/** Gives a member another role. @throws Refusal when the last owner would be lost */
export async function changeRole(
	tx: TenantTx,
	{ memberId, role }: { memberId: string; role: Role }
): Promise<void> {
	demand(tx, 'members.manage');
	const before = await tx.sql.query.member.findFirst({ where: eq(member.id, memberId) });
	if (!before) throw new Refusal('not_found', 'There is no such member any more.');
	await keepingAnOwner(() => tx.sql.update(member).set({ role }).where(eq(member.id, memberId)));
	await addToTrail(tx, {
		action: 'member.role_changed',
		subject: { type: 'member', id: memberId },
		before: { role: before.role },
		after: { role }
	});
}

/** Takes a person's role at the operator away. @throws Refusal when the last owner would be lost */
export async function removeMember(tx: TenantTx, memberId: string): Promise<void> {
	demand(tx, 'members.manage');
	const removed = await keepingAnOwner(() =>
		tx.sql.delete(member).where(eq(member.id, memberId)).returning()
	);
	if (!removed[0]) throw new Refusal('not_found', 'There is no such member any more.');
	await addToTrail(tx, {
		action: 'member.removed',
		subject: { type: 'member', id: memberId },
		before: { role: removed[0].role, userId: removed[0].userId }
	});
}

/** A person gives up their own role. @throws Refusal when they are the last owner */
export async function leaveOperator(tx: TenantTx): Promise<void> {
	if (tx.actor.kind !== 'member') throw new Refusal('forbidden', 'Only a member can leave.');
	const { userId, role } = tx.actor;
	await keepingAnOwner(() =>
		tx.sql
			.delete(member)
			.where(and(eq(member.operatorId, tx.operatorId), eq(member.userId, userId)))
	);
	await addToTrail(tx, {
		action: 'member.left',
		subject: { type: 'user', id: userId },
		before: { role }
	});
}
