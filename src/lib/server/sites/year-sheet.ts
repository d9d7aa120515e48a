import { and, desc, eq } from 'drizzle-orm';
import { demand } from '../auth/rights';
import { plan, programme, zone } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { demandSite, livePlan } from './sites';

/** Newest versions that a year sheet offers, besides the live one. */
const MOST_VERSIONS = 12;

/**
 * All that a year sheet computes from, so that the page asks for nothing later: the newest plan versions
 * with their bodies, the live one among them, and what is sold at the site's zones.
 * @throws Refusal (not_found, forbidden)
 */
export async function readYearSheet(tx: TenantTx, slug: string) {
	demand(tx, 'sites.write');
	const site = await demandSite(tx, slug);
	const newest = await tx.sql
		.select({ version: plan.version, state: plan.state, body: plan.body })
		.from(plan)
		.where(and(eq(plan.operatorId, tx.operatorId), eq(plan.siteId, site.id)))
		.orderBy(desc(plan.version))
		.limit(MOST_VERSIONS);
	const live = await livePlan(tx, site.id);
	const plans =
		live && !newest.some(({ version }) => version === live.version)
			? [...newest, { version: live.version, state: live.state, body: live.body }]
			: newest;
	const programmes = await tx.sql
		.select({
			id: programme.id,
			name: programme.name,
			zone: zone.name,
			seasonFrom: programme.seasonFrom,
			seasonTo: programme.seasonTo,
			openingHours: programme.openingHours,
			daysOff: programme.daysOff,
			slotMinutes: programme.slotMinutes,
			gapMinutes: programme.gapMinutes,
			gridMinutes: programme.gridMinutes,
			capacity: programme.capacity
		})
		.from(programme)
		.innerJoin(zone, eq(zone.id, programme.zoneId))
		.where(and(eq(programme.operatorId, tx.operatorId), eq(programme.siteId, site.id)))
		.orderBy(desc(programme.seasonFrom), programme.name);
	return { site, plans, programmes };
}
