import { and, desc, eq, max } from 'drizzle-orm';
import { mergePlans, type Merge } from '../../plan-merge/merge';
import { readPlan, type Plan } from '../../schemas/plan';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { plan, site, trail, zone } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { demandSite, type Site } from './sites';

export type PlanVersion = typeof plan.$inferSelect;

/** A plan with nothing drawn yet, at the site's place. */
export function emptyPlan(at: Site): Plan {
	return withPlace(
		{
			name: at.name,
			latitude: 0,
			longitude: 0,
			elevation: 0,
			timeZone: 'UTC',
			skyline: [],
			curtains: [],
			walls: [],
			zones: [],
			rule: { minimumArc: 45, minimumShare: 0.7, minimumSunAltitude: 3 }
		},
		at
	);
}

/** The site says where a plan lies, whatever the file says. */
function withPlace(body: Plan, at: Site): Plan {
	return {
		...body,
		latitude: at.latitudeDeg,
		longitude: at.longitudeDeg,
		elevation: at.elevationM,
		timeZone: at.timeZone
	};
}

/** A body that the engine would refuse is not stored. @throws Refusal with the faults */
function checked(body: Plan): Plan {
	const read = readPlan(body);
	if (!read.ok) {
		const [first, ...others] = read.faults;
		const more = others.length > 0 ? ` (and ${others.length} more)` : '';
		throw new Refusal('invalid', `${first?.path}: ${first?.message}${more}`);
	}
	const names = read.plan.zones.map((z, i) => z.name ?? `Zone ${i + 1}`);
	const twice = names.find((name, i) => names.indexOf(name) !== i);
	if (twice !== undefined) {
		throw new Refusal('invalid', `Two zones are called ${twice}: slots are sold by zone name.`);
	}
	return read.plan;
}

/** A site's plan versions, newest first. */
export function listPlans(tx: TenantTx, siteId: string) {
	demand(tx, 'sites.read');
	return tx.sql
		.select({
			id: plan.id,
			version: plan.version,
			state: plan.state,
			liveSince: plan.liveSince,
			changedAt: plan.changedAt
		})
		.from(plan)
		.where(and(eq(plan.operatorId, tx.operatorId), eq(plan.siteId, siteId)))
		.orderBy(desc(plan.version));
}

/** One version of a site's plan. @throws Refusal (not_found) */
export async function demandPlan(
	tx: TenantTx,
	siteId: string,
	version: number
): Promise<PlanVersion> {
	demand(tx, 'sites.read');
	const found = Number.isSafeInteger(version)
		? await tx.sql.query.plan.findFirst({
				where: and(
					eq(plan.operatorId, tx.operatorId),
					eq(plan.siteId, siteId),
					eq(plan.version, version)
				)
			})
		: undefined;
	if (!found) throw new Refusal('not_found', 'There is no such plan version.');
	return found;
}

/** Makes a new version: empty, a copy, or from a file. @returns its number */
export async function addPlan(tx: TenantTx, slug: string, body: Plan | null): Promise<number> {
	demand(tx, 'sites.write');
	const at = await demandSite(tx, slug);
	// One at a time: the site's row is the lock for the next number.
	await tx.sql.select({ id: site.id }).from(site).where(eq(site.id, at.id)).for('no key update');
	const [last] = await tx.sql
		.select({ version: max(plan.version) })
		.from(plan)
		.where(and(eq(plan.operatorId, tx.operatorId), eq(plan.siteId, at.id)));
	const version = (last?.version ?? 0) + 1;
	const [made] = await tx.sql
		.insert(plan)
		.values({
			operatorId: tx.operatorId,
			siteId: at.id,
			version,
			body: checked(body ? withPlace(body, at) : emptyPlan(at))
		})
		.returning({ id: plan.id });
	await addToTrail(tx, {
		action: 'plan.added',
		subject: { type: 'plan', id: made!.id },
		after: { site: at.slug, version }
	});
	return version;
}

/**
 * Saves a draft.
 * @param revision the count of saves that the editor started from
 * @throws Refusal when somebody else saved since, or the version was ever live
 */
export async function savePlan(
	tx: TenantTx,
	{ slug, version, revision, body }: { slug: string; version: number; revision: number; body: Plan }
): Promise<void> {
	demand(tx, 'sites.write');
	const at = await demandSite(tx, slug);
	const found = await demandPlan(tx, at.id, version);
	if (found.liveSince) {
		throw new Refusal('conflict', 'A version that was live does not change. Copy it to a new one.');
	}
	const saved = await tx.sql
		.update(plan)
		.set({
			body: checked(withPlace(body, at)),
			revision: found.revision + 1,
			changedAt: new Date()
		})
		.where(and(eq(plan.id, found.id), eq(plan.revision, revision)))
		.returning({ id: plan.id });
	if (saved.length === 0) {
		throw new Refusal(
			'conflict',
			`${await lastEditor(tx, found.id)} has saved this version since you opened it. Bring the two together, or save yours as a new version.`
		);
	}
	await addToTrail(tx, {
		action: 'plan.saved',
		subject: { type: 'plan', id: found.id },
		before: { revision },
		after: { revision: revision + 1 }
	});
}

/** Who saved a version last, by the name in the trail. */
async function lastEditor(tx: TenantTx, planId: string): Promise<string> {
	const last = await tx.sql.query.trail.findFirst({
		columns: { actorName: true },
		where: and(
			eq(trail.operatorId, tx.operatorId),
			eq(trail.action, 'plan.saved'),
			eq(trail.subjectId, planId)
		),
		orderBy: desc(trail.id)
	});
	return last?.actorName ?? 'Somebody else';
}

/**
 * Brings what an editor made together with what was saved meanwhile. Nothing is saved: the editor looks
 * at the outcome first.
 * @param base what the editor began from, as the editor has it
 * @returns the merged plan, with what was saved and its revision, from which the editor now goes on
 * @throws Refusal when the version was live and does not change
 */
export async function mergePlan(
	tx: TenantTx,
	{ slug, version, base, mine }: { slug: string; version: number; base: Plan; mine: Plan }
): Promise<Merge & { theirs: Plan; revision: number }> {
	demand(tx, 'sites.write');
	const at = await demandSite(tx, slug);
	const found = await demandPlan(tx, at.id, version);
	if (found.liveSince) {
		throw new Refusal('conflict', 'A version that was live does not change. Copy it to a new one.');
	}
	const merge = mergePlans({ base, mine: withPlace(mine, at), theirs: found.body });
	return { ...merge, theirs: found.body, revision: found.revision };
}

/** Why a plan can not go live at its site, in words; null when it can. */
export function liveObstacle(at: Site, body: Plan): string | null {
	if (body.zones.length === 0) return 'The plan has no zone to stand in.';
	if (!body.curtains.some((curtain) => curtain.enabled ?? true)) {
		return 'The plan has no curtain that is switched on.';
	}
	const moved = [at.latitudeDeg, at.longitudeDeg, at.elevationM, at.timeZone].some(
		(value, i) => value !== [body.latitude, body.longitude, body.elevation, body.timeZone][i]
	);
	return moved ? 'The site’s place was changed since. Save the plan again first.' : null;
}

/**
 * Makes a version the live one; the one before is retired. Slots stay as they are: sold ones that no
 * longer lie in a window are listed as conflicts until a person decides about each.
 */
export async function makeLive(tx: TenantTx, slug: string, version: number): Promise<void> {
	demand(tx, 'sites.write');
	const at = await demandSite(tx, slug);
	await tx.sql.select({ id: site.id }).from(site).where(eq(site.id, at.id)).for('no key update');
	const found = await demandPlan(tx, at.id, version);
	if (found.state === 'live') return;
	const { body } = found;
	const obstacle = liveObstacle(at, body);
	if (obstacle) throw new Refusal('conflict', obstacle);
	await tx.sql
		.update(plan)
		.set({ state: 'retired' })
		.where(and(eq(plan.operatorId, tx.operatorId), eq(plan.siteId, at.id), eq(plan.state, 'live')));
	await tx.sql
		.update(plan)
		.set({ state: 'live', liveSince: found.liveSince ?? new Date() })
		.where(eq(plan.id, found.id));
	await tx.sql
		.insert(zone)
		.values(
			body.zones.map((z, i) => ({
				operatorId: tx.operatorId,
				siteId: at.id,
				name: z.name ?? `Zone ${i + 1}`
			}))
		)
		.onConflictDoNothing();
	await addToTrail(tx, {
		action: 'plan.made_live',
		subject: { type: 'plan', id: found.id },
		after: { site: at.slug, version }
	});
}
