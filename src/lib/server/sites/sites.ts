import { and, asc, eq } from 'drizzle-orm';
import { find as findTimeZones } from 'geo-tz';
import { isTimeZone } from '../../schedule';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { plan, site } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { slugOf } from '../operators/operators';

export type Site = typeof site.$inferSelect;

export interface NewSite {
	name: string;
	latitudeDeg: number;
	longitudeDeg: number;
	elevationM: number;
	/** IANA; empty: taken from the coordinates. */
	timeZone: string;
	currency: string;
}

/** The time zone of a place, from outlines that ship with the product; null far out where none is. */
export function suggestTimeZone(latitudeDeg: number, longitudeDeg: number): string | null {
	return findTimeZones(latitudeDeg, longitudeDeg).find(isTimeZone) ?? null;
}

/** Makes a site; two of one name get different addresses. */
export async function createSite(
	tx: TenantTx,
	wanted: NewSite
): Promise<{ id: string; slug: string }> {
	demand(tx, 'sites.write');
	const timeZone =
		wanted.timeZone || suggestTimeZone(wanted.latitudeDeg, wanted.longitudeDeg) || 'UTC';
	const base = slugOf(wanted.name);
	for (let attempt = 1; attempt <= 50; attempt++) {
		const slug = attempt === 1 ? base : `${base}-${attempt}`;
		const [made] = await tx.sql
			.insert(site)
			.values({ ...wanted, timeZone, operatorId: tx.operatorId, slug })
			.onConflictDoNothing({ target: [site.operatorId, site.slug] })
			.returning({ id: site.id });
		if (!made) continue;
		await addToTrail(tx, {
			action: 'site.created',
			subject: { type: 'site', id: made.id },
			after: { ...wanted, timeZone, slug }
		});
		return { id: made.id, slug };
	}
	throw new Refusal('conflict', 'Many sites have this name. Choose another.', 'name');
}

/** The operator's sites by name. */
export function listSites(tx: TenantTx): Promise<Site[]> {
	demand(tx, 'sites.read');
	return tx.sql.query.site.findMany({
		where: eq(site.operatorId, tx.operatorId),
		orderBy: asc(site.name)
	});
}

/** A site by its name in addresses. @throws Refusal (not_found) */
export async function demandSite(tx: TenantTx, slug: string): Promise<Site> {
	demand(tx, 'sites.read');
	const found = await tx.sql.query.site.findFirst({
		where: and(eq(site.operatorId, tx.operatorId), eq(site.slug, slug))
	});
	if (!found) throw new Refusal('not_found', 'There is no such site.');
	return found;
}

export interface SiteChange {
	name: string;
	latitudeDeg: number;
	longitudeDeg: number;
	elevationM: number;
	timeZone: string;
	currency: string;
	description: string;
	arrival: string;
	pictureAlt: string;
	gustLimitMs: number;
	open: boolean;
}

/**
 * Changes a site. Its place and zone are what windows are computed from and its currency what is
 * charged in: they stay once a plan version has gone live.
 */
export async function changeSite(tx: TenantTx, slug: string, wanted: SiteChange): Promise<void> {
	demand(tx, 'sites.write');
	const before = await demandSite(tx, slug);
	const everLive = await wasEverLive(tx, before.id);
	for (const [field, said] of fixedOnceLive) {
		if (everLive && before[field] !== wanted[field]) {
			throw new Refusal('conflict', `${said} stays as it is: a plan version is live.`, field);
		}
	}
	await tx.sql.update(site).set(wanted).where(eq(site.id, before.id));
	const changed = (Object.keys(wanted) as (keyof SiteChange)[]).filter(
		(field) => before[field] !== wanted[field]
	);
	await addToTrail(tx, {
		action: 'site.changed',
		subject: { type: 'site', id: before.id },
		before: Object.fromEntries(changed.map((field) => [field, before[field]])),
		after: Object.fromEntries(changed.map((field) => [field, wanted[field]]))
	});
}

const fixedOnceLive = [
	['latitudeDeg', 'The latitude'],
	['longitudeDeg', 'The longitude'],
	['elevationM', 'The elevation'],
	['timeZone', 'The time zone'],
	['currency', 'The currency']
] as const;

/** Whether a plan version of the site is or was live. */
export async function wasEverLive(tx: TenantTx, siteId: string): Promise<boolean> {
	const live = await tx.sql.query.plan.findFirst({
		columns: { id: true },
		where: (row, { isNotNull }) =>
			and(eq(row.operatorId, tx.operatorId), eq(row.siteId, siteId), isNotNull(row.liveSince))
	});
	return live !== undefined;
}

/** The site's live plan version; null before the first. */
export async function livePlan(tx: TenantTx, siteId: string) {
	const found = await tx.sql.query.plan.findFirst({
		where: and(eq(plan.operatorId, tx.operatorId), eq(plan.siteId, siteId), eq(plan.state, 'live'))
	});
	return found ?? null;
}
