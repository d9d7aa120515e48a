import type { Role } from '../db/schema/operators';
import type { PlainTx, TenantTx } from '../db/transaction';
import { Refusal } from '../failures';

/** Who may do what: the one table. The owner may do everything. */
const holders = {
	'members.manage': [],
	'operator.settings': [],
	'trail.read': [],
	'letters.read': ['box_office', 'bookkeeper'],
	'sites.read': ['planner', 'box_office', 'steward', 'bookkeeper'],
	'sites.write': ['planner'],
	'programmes.write': ['planner'],
	'weather.decide': ['planner'],
	'orders.read': ['planner', 'box_office', 'bookkeeper'],
	'orders.write': ['box_office'],
	'orders.move': ['box_office'],
	'conflicts.decide': ['planner'],
	'gate.use': ['steward', 'box_office', 'planner'],
	'money.read': ['bookkeeper'],
	'money.settings': []
} as const satisfies Record<string, readonly Role[]>;

export type Right = keyof typeof holders;

/** Whether a role has a right. */
export function mayRole(role: Role, right: Right): boolean {
	return role === 'owner' || (holders[right] as readonly Role[]).includes(role);
}

/** The rights of a role, for menus; services check again with `demand`. */
export function rightsOf(role: Role): Right[] {
	return (Object.keys(holders) as Right[]).filter((right) => mayRole(role, right));
}

/**
 * Checks that the transaction's actor has a right. The worker acts for the operator as a whole.
 * @throws Refusal (forbidden)
 */
export function demand(tx: TenantTx, right: Right): void {
	if (tx.actor.kind === 'worker') return;
	if (tx.actor.kind === 'member' && mayRole(tx.actor.role, right)) return;
	throw new Refusal('forbidden', 'Your role at this operator does not include this.');
}

/**
 * Checks that the transaction's actor is the platform administration.
 * @throws Refusal (forbidden)
 */
export function demandPlatform(tx: PlainTx): void {
	if (tx.actor.kind !== 'platform') {
		throw new Refusal('forbidden', 'This is for the platform administration.');
	}
}
