import { and, eq } from 'drizzle-orm';
import { withTraced } from '../../panorama/trace';
import type { PanoramaView } from '../../panorama/geometry';
import type { TracePoint } from '../../panorama/trace';
import { viewFault } from '../../schemas/panorama';
import type { Skyline } from '../../schemas/plan';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { panorama, picture } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import type { ReadPicture } from './pictures';
import { addPlan, demandPlan, savePlan } from './plans';
import { demandSite } from './sites';

/** Edges of a panorama as it is kept: wide enough to trace a tenth of a degree all round. */
export const panoramaEdges = { widthPx: 4096, heightPx: 2048 };

/** A site's panorama with its picture's size; null when there is none. */
export async function findPanorama(tx: TenantTx, siteId: string) {
	demand(tx, 'sites.read');
	const [found] = await tx.sql
		.select({
			id: panorama.id,
			pictureId: panorama.pictureId,
			projection: panorama.projection,
			marking: panorama.marking,
			widthPx: picture.widthPx,
			heightPx: picture.heightPx
		})
		.from(panorama)
		.innerJoin(picture, eq(picture.id, panorama.pictureId))
		.where(and(eq(panorama.operatorId, tx.operatorId), eq(panorama.siteId, siteId)));
	return found ?? null;
}

/** The picture of a site's panorama as it is kept. @throws Refusal (not_found) */
export async function demandPanoramaPicture(tx: TenantTx, slug: string, pictureId: string) {
	const site = await demandSite(tx, slug);
	const found = await findPanorama(tx, site.id);
	const kept =
		found?.pictureId === pictureId
			? await tx.sql.query.picture.findFirst({
					where: and(eq(picture.operatorId, tx.operatorId), eq(picture.id, pictureId))
				})
			: undefined;
	if (!kept) throw new Refusal('not_found', 'There is no such picture.');
	return kept;
}

/** Gives a site a panorama in place of the one it had; the marks of the old one go with it. */
export async function changePanorama(tx: TenantTx, slug: string, read: ReadPicture): Promise<void> {
	demand(tx, 'sites.write');
	const site = await demandSite(tx, slug);
	const before = await findPanorama(tx, site.id);
	const [made] = await tx.sql
		.insert(picture)
		.values({ operatorId: tx.operatorId, contentType: 'image/webp', ...read })
		.returning({ id: picture.id });
	if (!made) throw new Error('no picture was written');
	const values = { pictureId: made.id, projection: 'cylinder', marking: null } as const;
	await tx.sql
		.insert(panorama)
		.values({ operatorId: tx.operatorId, siteId: site.id, ...values })
		.onConflictDoUpdate({ target: [panorama.operatorId, panorama.siteId], set: values });
	if (before) await tx.sql.delete(picture).where(eq(picture.id, before.pictureId));
	await addToTrail(tx, {
		action: 'panorama.changed',
		subject: { type: 'site', id: site.id },
		after: { widthPx: read.widthPx, heightPx: read.heightPx }
	});
}

/** Marks and line of a site's panorama. @throws Refusal when there is no picture or the marks are wrong */
export async function markPanorama(
	tx: TenantTx,
	slug: string,
	{ view, points }: { view: PanoramaView; points: TracePoint[] }
): Promise<void> {
	demand(tx, 'sites.write');
	const site = await demandSite(tx, slug);
	const fault = viewFault(view);
	if (fault) throw new Refusal('invalid', fault);
	const changed = await tx.sql
		.update(panorama)
		.set({
			projection: view.projection,
			marking: { marks: [view.marks[0], view.marks[1]], points }
		})
		.where(and(eq(panorama.operatorId, tx.operatorId), eq(panorama.siteId, site.id)))
		.returning({ id: panorama.id });
	if (changed.length === 0) throw new Refusal('conflict', 'There is no picture yet.');
}

/**
 * Puts traced corners into the skyline of a plan version. A draft is saved; of a version that was live a
 * new one is made. What else is in the plan stays as it is.
 * @returns the number of the version that has it
 * @throws Refusal when the skyline would be wrong, or somebody saves the draft at this very moment
 */
export async function putSkyline(
	tx: TenantTx,
	{ slug, version, corners }: { slug: string; version: number; corners: Skyline }
): Promise<number> {
	demand(tx, 'sites.write');
	if (corners.length < 2) {
		throw new Refusal('invalid', 'Trace at least two places first.', 'corners');
	}
	const site = await demandSite(tx, slug);
	const found = await demandPlan(tx, site.id, version);
	const traced = corners.map(([azimuthDeg, altitudeDeg]) => ({ azimuthDeg, altitudeDeg }));
	const body = { ...found.body, skyline: withTraced(found.body.skyline, traced) };
	if (found.liveSince) return addPlan(tx, slug, body);
	await savePlan(tx, { slug, version, revision: found.revision, body });
	return version;
}
