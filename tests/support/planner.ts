import { eq } from 'drizzle-orm';
import { seenOf, type Chosen } from '../../src/lib/conflict-deeds.ts';
import { plan } from '../../src/lib/server/db/schema/index.ts';
import type { Role } from '../../src/lib/server/db/schema/operators.ts';
import { lookAtConflicts } from '../../src/lib/server/sites/conflicts.ts';
import { decideConflicts, goLive } from '../../src/lib/server/sites/decide.ts';
import type { Person } from './people.ts';
import type { Shop } from './shop.ts';

export const reason = 'The curtain was moved, and the bow stands later.';

/** What a planner does with the plan versions of a shop's site: as its owner, unless somebody else is named. */
export function plannerOf(shop: Shop) {
	const { slug, siteId } = shop.site;
	const asker = (person: Person = shop.owner, role: Role = 'owner') => ({
		operatorId: shop.operatorId,
		origin: {
			actor: { kind: 'member', userId: person.userId, name: person.name, role } as const,
			requestId: 'test'
		}
	});
	const decisions = (digest: string | null, chosen: Chosen[]) => ({
		digest: digest ?? '',
		seen: seenOf(chosen),
		chosen,
		reason
	});
	return {
		asker,
		decisions,
		/** The conflicts of a version; of the live one for null. */
		look: async (version: number | null, now = new Date()) =>
			(await lookAtConflicts(asker(), { slug, version }, now))!,
		live: (version: number, digest: string | null, chosen: Chosen[] = []) =>
			goLive(asker(), { slug, version }, decisions(digest, chosen), new Date()),
		decide: (digest: string | null, chosen: Chosen[]) =>
			decideConflicts(asker(), slug, decisions(digest, chosen), new Date()),
		stateOf: async (version: number) =>
			(
				await shop.asOwner((tx) => tx.sql.query.plan.findMany({ where: eq(plan.siteId, siteId) }))
			).find((one) => one.version === version)?.state
	};
}
