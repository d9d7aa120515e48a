import { and, asc, eq, inArray, notInArray } from 'drizzle-orm';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { priceCategory, programme, zone } from '../db/schema';
import type { OpeningHours, RefundPolicy } from '../db/schema/programmes';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { demandSite } from '../sites/sites';

export type Programme = typeof programme.$inferSelect;

export interface PriceWanted {
	/** Empty for a new one. */
	id: string;
	name: string;
	amountMinor: number;
	taxPercent: string;
}

export interface ProgrammeWanted {
	name: string;
	zoneId: string;
	seasonFrom: string;
	seasonTo: string;
	openingHours: OpeningHours;
	daysOff: string[];
	slotMinutes: number;
	gapMinutes: number;
	gridMinutes: number;
	capacity: number;
	refundPolicy: RefundPolicy;
	prices: PriceWanted[];
}

/** Programmes of a site with the name of their zone. */
export function listProgrammes(tx: TenantTx, siteId: string) {
	demand(tx, 'sites.read');
	return tx.sql
		.select({
			id: programme.id,
			name: programme.name,
			zone: zone.name,
			seasonFrom: programme.seasonFrom,
			seasonTo: programme.seasonTo,
			publishedAt: programme.publishedAt
		})
		.from(programme)
		.innerJoin(zone, eq(zone.id, programme.zoneId))
		.where(and(eq(programme.operatorId, tx.operatorId), eq(programme.siteId, siteId)))
		.orderBy(asc(programme.seasonFrom), asc(programme.name));
}

/** Zones of a site that a programme can be for. */
export function listZones(tx: TenantTx, siteId: string) {
	demand(tx, 'sites.read');
	return tx.sql
		.select({ id: zone.id, name: zone.name })
		.from(zone)
		.where(and(eq(zone.operatorId, tx.operatorId), eq(zone.siteId, siteId)))
		.orderBy(asc(zone.name));
}

/** A programme with its prices. @throws Refusal (not_found) */
export async function demandProgramme(tx: TenantTx, siteId: string, id: string) {
	demand(tx, 'sites.read');
	const found = await tx.sql.query.programme.findFirst({
		where: and(
			eq(programme.operatorId, tx.operatorId),
			eq(programme.siteId, siteId),
			eq(programme.id, id)
		)
	});
	if (!found) throw new Refusal('not_found', 'There is no such programme.');
	const prices = await tx.sql.query.priceCategory.findMany({
		where: and(
			eq(priceCategory.operatorId, tx.operatorId),
			eq(priceCategory.programmeId, id),
			eq(priceCategory.withdrawn, false)
		),
		orderBy: [asc(priceCategory.position), asc(priceCategory.id)]
	});
	return { programme: found, prices };
}

/**
 * Makes a programme, or changes one. Slots already published stay as they are until it is published
 * again; orders keep the prices that they were sold at.
 * @returns the programme's id
 */
export async function saveProgramme(
	tx: TenantTx,
	{ slug, id }: { slug: string; id: string | null },
	{ prices, ...wanted }: ProgrammeWanted
): Promise<string> {
	demand(tx, 'programmes.write');
	const site = await demandSite(tx, slug);
	const zones = await listZones(tx, site.id);
	if (!zones.some((known) => known.id === wanted.zoneId)) {
		throw new Refusal('invalid', 'Choose a zone of the live plan.', 'zoneId');
	}
	const before = id ? (await demandProgramme(tx, site.id, id)).programme : null;
	if (before?.publishedAt && before.zoneId !== wanted.zoneId) {
		throw new Refusal('conflict', 'A published programme stays at its zone.', 'zoneId');
	}
	const [saved] = before
		? await tx.sql
				.update(programme)
				.set(wanted)
				.where(eq(programme.id, before.id))
				.returning({ id: programme.id })
		: await tx.sql
				.insert(programme)
				.values({ operatorId: tx.operatorId, siteId: site.id, ...wanted })
				.returning({ id: programme.id });
	if (!saved) throw new Error('no programme was written');
	await savePrices(tx, saved.id, prices);
	await addToTrail(tx, {
		action: before ? 'programme.changed' : 'programme.created',
		subject: { type: 'programme', id: saved.id },
		...(before ? { before: { ...before } } : {}),
		after: { ...wanted, prices }
	});
	return saved.id;
}

async function savePrices(tx: TenantTx, programmeId: string, prices: PriceWanted[]): Promise<void> {
	const known = await tx.sql.query.priceCategory.findMany({
		where: and(
			eq(priceCategory.operatorId, tx.operatorId),
			eq(priceCategory.programmeId, programmeId)
		)
	});
	const kept: string[] = [];
	for (const [position, { id, ...price }] of prices.entries()) {
		const values = {
			...price,
			taxCategory: Number(price.taxPercent) === 0 ? ('Z' as const) : ('S' as const),
			position,
			withdrawn: false
		};
		if (known.some((row) => row.id === id)) {
			await tx.sql.update(priceCategory).set(values).where(eq(priceCategory.id, id));
			kept.push(id);
		} else {
			const [made] = await tx.sql
				.insert(priceCategory)
				.values({ operatorId: tx.operatorId, programmeId, ...values })
				.returning({ id: priceCategory.id });
			kept.push(made!.id);
		}
	}
	// Orders speak of prices: one that is no longer sold is withdrawn, never deleted.
	await tx.sql
		.update(priceCategory)
		.set({ withdrawn: true })
		.where(
			and(
				eq(priceCategory.operatorId, tx.operatorId),
				eq(priceCategory.programmeId, programmeId),
				kept.length > 0 ? notInArray(priceCategory.id, kept) : undefined,
				known.length > 0
					? inArray(
							priceCategory.id,
							known.map((row) => row.id)
						)
					: undefined
			)
		);
}
