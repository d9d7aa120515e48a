import { and, asc, eq, gt, gte, lte, sql } from 'drizzle-orm';
import { priceCategory, programme, site, slot, zone } from '../db/schema';
import type { TenantTx } from '../db/transaction';

const columns = {
	id: slot.id,
	siteId: slot.siteId,
	programmeId: slot.programmeId,
	zone: zone.name,
	localDate: slot.localDate,
	startsAt: slot.startsAt,
	endsAt: slot.endsAt,
	windowStartsAt: slot.windowStartsAt,
	windowEndsAt: slot.windowEndsAt,
	status: slot.status,
	capacity: slot.capacity,
	held: slot.held,
	sold: slot.sold,
	arcDeg: slot.arcDeg,
	share: slot.share,
	sunAltitudeDeg: slot.sunAltitudeDeg,
	lookAzimuthDeg: slot.lookAzimuthDeg,
	dropDiameterUm: slot.dropDiameterUm,
	currency: site.currency
};

function query(tx: TenantTx) {
	return tx.sql
		.select(columns)
		.from(slot)
		.innerJoin(site, eq(site.id, slot.siteId))
		.innerJoin(zone, eq(zone.id, slot.zoneId))
		.$dynamic();
}

export type SlotForSale = Awaited<ReturnType<typeof query>>[number];

/** A site that visitors can see, by its name in addresses; null when it is not open. */
export async function findOpenSite(tx: TenantTx, slug: string) {
	const found = await tx.sql.query.site.findFirst({
		where: and(eq(site.operatorId, tx.operatorId), eq(site.slug, slug), eq(site.open, true))
	});
	return found ?? null;
}

/** The operator's sites that visitors can see, by name. */
export function listOpenSites(tx: TenantTx) {
	return tx.sql.query.site.findMany({
		where: and(eq(site.operatorId, tx.operatorId), eq(site.open, true)),
		orderBy: asc(site.name)
	});
}

/** Slots that visitors can see: not begun; and called-off ones too, so that nobody seeks them in vain. */
function visible(tx: TenantTx, siteId: string, now: Date) {
	return [
		eq(slot.operatorId, tx.operatorId),
		eq(slot.siteId, siteId),
		gt(slot.startsAt, now),
		// A slot that was merely taken back, with nobody in it, is not told of.
		sql`(${slot.status} <> 'called_off' or exists (select 1 from weather_call_slot called
			where called.operator_id = ${slot.operatorId} and called.slot_id = ${slot.id}))`
	];
}

/**
 * Local dates on which a site has slots that visitors can see, in order.
 * @param from the first date to look at
 */
export async function listSaleDates(
	tx: TenantTx,
	{ siteId, now, from, most }: { siteId: string; now: Date; from: string; most: number }
): Promise<string[]> {
	const rows = await tx.sql
		.selectDistinct({ date: slot.localDate })
		.from(slot)
		.where(and(...visible(tx, siteId, now), gte(slot.localDate, from)))
		.orderBy(asc(slot.localDate))
		.limit(most);
	return rows.map(({ date }) => date);
}

/**
 * Slots of a site that visitors can see, in order of time.
 * @param until local date, counted
 */
export function listSlotsForSale(
	tx: TenantTx,
	{ siteId, now, from, until }: { siteId: string; now: Date; from?: string; until: string }
): Promise<SlotForSale[]> {
	return query(tx)
		.where(
			and(
				...visible(tx, siteId, now),
				...(from ? [gte(slot.localDate, from)] : []),
				lte(slot.localDate, until)
			)
		)
		.orderBy(asc(slot.startsAt))
		.limit(2000);
}

/** One slot, for sale or not; null when there is none of that name at an open site. */
export async function findSlot(tx: TenantTx, slotId: string): Promise<SlotForSale | null> {
	const [found] = await query(tx).where(
		and(eq(slot.operatorId, tx.operatorId), eq(slot.id, slotId), eq(site.open, true))
	);
	return found ?? null;
}

/** A slot that can be bought now: open, not begun, at an open site; else null. */
export async function findSlotForSale(
	tx: TenantTx,
	slotId: string,
	now: Date
): Promise<SlotForSale | null> {
	const found = await findSlot(tx, slotId);
	return found && found.status === 'open' && found.startsAt > now ? found : null;
}

/** What a programme's places cost, in the order that the planner gave. */
export function listPrices(tx: TenantTx, programmeId: string) {
	return tx.sql
		.select({
			id: priceCategory.id,
			name: priceCategory.name,
			amountMinor: priceCategory.amountMinor,
			taxPercent: priceCategory.taxPercent,
			minimumQuantity: priceCategory.minimumQuantity
		})
		.from(priceCategory)
		.where(
			and(
				eq(priceCategory.operatorId, tx.operatorId),
				eq(priceCategory.programmeId, programmeId),
				eq(priceCategory.withdrawn, false)
			)
		)
		.orderBy(asc(priceCategory.position), asc(priceCategory.id));
}

/** The refund policy under which a slot is sold. */
export async function readRefundPolicy(tx: TenantTx, programmeId: string) {
	const found = await tx.sql.query.programme.findFirst({
		columns: { refundPolicy: true },
		where: and(eq(programme.operatorId, tx.operatorId), eq(programme.id, programmeId))
	});
	return found?.refundPolicy ?? { untilHoursBefore: 0, percent: 0 };
}

/** Places left in a slot, for showing: lapsed holds may still be counted until they are released. */
export function placesLeft(
	row: Pick<typeof slot.$inferSelect, 'capacity' | 'held' | 'sold'>
): number {
	return Math.max(0, row.capacity - row.held - row.sold);
}
