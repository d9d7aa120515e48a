import { and, asc, count, eq, like, sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { addToTrail } from '../audit/trail';
import { demand, demandPlatform } from '../auth/rights';
import { member, operator } from '../db/schema';
import type { Role } from '../db/schema/operators';
import { inTenant, type PlainTx, type TenantTx } from '../db/transaction';
import { violates } from '../db/errors';
import { Refusal } from '../failures';

/** A name as it can stand in an address: `Müller & Sons` becomes `muller-sons`. */
export function slugOf(name: string): string {
	const slug = name
		.normalize('NFKD')
		.replaceAll(/\p{M}/gu, '')
		.toLowerCase()
		.replaceAll(/[^a-z0-9]+/g, '-')
		.replaceAll(/^-+|-+$/g, '')
		.slice(0, 48)
		.replace(/-+$/, '');
	return slug === '' ? 'operator' : slug;
}

/**
 * Opens an operator with its first owner. Two operators may have the same name; the address gets a
 * number then.
 */
export async function openOperator(
	owner: { userId: string; name: string },
	operatorName: string,
	requestId: string | null
): Promise<{ id: string; slug: string }> {
	const base = slugOf(operatorName);
	for (let attempt = 1; attempt <= 50; attempt++) {
		const id = uuidv7();
		const slug = attempt === 1 ? base : `${base}-${attempt}`;
		try {
			return await inTenant(
				id,
				{ actor: { kind: 'member', ...owner, role: 'owner' }, requestId },
				async (tx) => {
					await tx.sql.insert(operator).values({ id, slug, name: operatorName });
					await tx.sql
						.insert(member)
						.values({ operatorId: id, userId: owner.userId, role: 'owner' });
					await addToTrail(tx, {
						action: 'operator.opened',
						subject: { type: 'operator', id },
						after: { name: operatorName, slug }
					});
					return { id, slug };
				}
			);
		} catch (error) {
			if (!violates(error, 'operator_slug_key')) throw error;
		}
	}
	throw new Refusal('conflict', 'Many operators have this name. Choose another.', 'operatorName');
}

export interface Membership {
	operatorId: string;
	slug: string;
	name: string;
	status: 'open' | 'suspended';
	requireSecondStep: boolean;
	role: Role;
}

const membershipColumns = {
	operatorId: operator.id,
	slug: operator.slug,
	name: operator.name,
	status: operator.status,
	requireSecondStep: operator.requireSecondStep,
	role: member.role
};

/** The operators at which the transaction's person holds a role, by name. */
export function listMemberships(tx: PlainTx, userId: string): Promise<Membership[]> {
	return tx.sql
		.select(membershipColumns)
		.from(member)
		.innerJoin(operator, eq(operator.id, member.operatorId))
		.where(eq(member.userId, userId))
		.orderBy(asc(operator.name));
}

/** The person's membership at the operator with this slug; null also when there is no such operator. */
export async function findMembership(
	tx: PlainTx,
	userId: string,
	slug: string
): Promise<Membership | null> {
	const [found] = await tx.sql
		.select(membershipColumns)
		.from(member)
		.innerJoin(operator, eq(operator.id, member.operatorId))
		.where(and(eq(member.userId, userId), eq(operator.slug, slug)));
	return found ?? null;
}

/** The operator of the transaction. */
export async function readOperator(tx: TenantTx) {
	const found = await tx.sql.query.operator.findFirst({ where: eq(operator.id, tx.operatorId) });
	if (!found) throw new Refusal('not_found', 'There is no such operator.');
	return found;
}

/** Changes the operator's name and whether all members need the second step. */
export async function changeOperator(
	tx: TenantTx,
	wanted: { name: string; requireSecondStep: boolean }
): Promise<void> {
	demand(tx, 'operator.settings');
	const before = await readOperator(tx);
	await tx.sql.update(operator).set(wanted).where(eq(operator.id, tx.operatorId));
	await addToTrail(tx, {
		action: 'operator.changed',
		subject: { type: 'operator', id: tx.operatorId },
		before: { name: before.name, requireSecondStep: before.requireSecondStep },
		after: wanted
	});
}

/** A page of all operators, for the platform administration. */
export async function listOperators(
	tx: PlainTx,
	{ search, most, skip }: { search: string; most: number; skip: number }
) {
	demandPlatform(tx);
	const wanted = search
		? like(sql`lower(${operator.name})`, `%${search.toLowerCase().replaceAll(/[\\%_]/g, '\\$&')}%`)
		: undefined;
	const rows = await tx.sql
		.select()
		.from(operator)
		.where(wanted)
		.orderBy(asc(operator.name), asc(operator.id))
		.limit(most)
		.offset(skip);
	const [total] = await tx.sql.select({ n: count() }).from(operator).where(wanted);
	return { rows, total: total?.n ?? 0 };
}

/** Suspends an operator (with a reason) or opens it again (reason null). */
export async function setOperatorStatus(
	tx: PlainTx,
	operatorId: string,
	reason: string | null
): Promise<void> {
	demandPlatform(tx);
	const status = reason === null ? 'open' : 'suspended';
	const changed = await tx.sql
		.update(operator)
		.set({ status, suspendedReason: reason })
		.where(eq(operator.id, operatorId))
		.returning({ name: operator.name });
	const found = changed[0];
	if (!found) throw new Refusal('not_found', 'There is no such operator.');
	await addToTrail(tx, {
		action: `operator.${status === 'open' ? 'reopened' : 'suspended'}`,
		subject: { type: 'operator', id: operatorId },
		after: { name: found.name, reason }
	});
}
