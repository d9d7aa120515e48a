import { and, desc, eq } from 'drizzle-orm';
import { demand } from '../auth/rights';
import { plan } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { sellingOf } from './selling';
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
	const programmes = await sellingOf(tx, site.id);
	return { site, plans, programmes };
}
