import { and, asc, eq, gt, gte, inArray, lte, ne, sql, type SQL } from 'drizzle-orm';
import { demand } from '../auth/rights';
import { listSlotMoves, movesUnderWay, placesComing } from '../booking/move-slot';
import { bowWindow, keptSlot, order, payment, slot, zone } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { demandPlan, type PlanVersion } from './plans';
import { demandSite, livePlan, type Site } from './sites';
import { windowsOn, type WindowsOn } from './windows-on';

const dayMs = 86_400_000;

/** Slots are offered to move to within so many days of a conflict. */
const targetDays = 10;

/** What is read in one transaction, before windows are looked at. */
export interface Basis {
	site: Site;
	plan: PlanVersion;
	/** Coming slots in which somebody is and that lie in a window of another version. */
	doubtful: SlotAt[];
	/** Coming open slots with room, near those. */
	candidates: SlotAt[];
	sums: Map<string, { orders: number; pending: number; amountMinor: number }>;
	kept: Map<string, { byName: string; at: Date }>;
	moving: Map<string, string>;
	failedMoves: Map<string, string>;
	placesComing: Map<string, number>;
}

/** Which version of which site is asked about. */
export interface Asked {
	slug: string;
	version: number | null;
	counted?: boolean;
}

export type SlotAt = Awaited<ReturnType<typeof comingSlots>>[number];

function comingSlots(tx: TenantTx, siteId: string, now: Date, ...more: SQL[]) {
	return tx.sql
		.select({
			id: slot.id,
			zone: zone.name,
			localDate: slot.localDate,
			startsAt: slot.startsAt,
			endsAt: slot.endsAt,
			status: slot.status,
			capacity: slot.capacity,
			held: slot.held,
			sold: slot.sold,
			/** The plan version whose window holds it, by the database's own promise. */
			windowPlanId: bowWindow.planId
		})
		.from(slot)
		.innerJoin(zone, eq(zone.id, slot.zoneId))
		.innerJoin(bowWindow, eq(bowWindow.id, slot.windowId))
		.where(
			and(
				eq(slot.operatorId, tx.operatorId),
				eq(slot.siteId, siteId),
				gt(slot.startsAt, now),
				ne(slot.status, 'called_off'),
				...more
			)
		)
		.orderBy(asc(slot.startsAt), asc(slot.id));
}

/**
 * Reads what the conflicts of a plan version follow from.
 * @param version null: the live one
 * @param counted only: what is in the slots, and where they could go, is left out
 * @returns null when no version is live
 */
export async function readBasis(
	tx: TenantTx,
	{ slug, version, counted = false }: Asked,
	now: Date
): Promise<Basis | null> {
	demand(tx, 'conflicts.decide');
	const site = await demandSite(tx, slug);
	const plan =
		version === null ? await livePlan(tx, site.id) : await demandPlan(tx, site.id, version);
	if (!plan) return null;
	// Before the slots: one that is emptied in between is told as being moved, never as undecided.
	const moving = await movesUnderWay(tx, { siteId: site.id });
	const doubtful = await comingSlots(
		tx,
		site.id,
		now,
		sql`${slot.sold} + ${slot.held} > 0`,
		ne(bowWindow.planId, plan.id)
	);
	const candidates = counted ? [] : await candidatesNear(tx, site.id, doubtful, now);
	const ids = doubtful.map(({ id }) => id);
	const moves = counted ? [] : await listSlotMoves(tx, site.id, 200);
	const newestFirst = [...moves].reverse();
	return {
		site,
		plan,
		doubtful,
		candidates,
		sums: counted ? new Map() : await sumsOf(tx, ids),
		kept: await keptOf(tx, plan.id),
		moving,
		failedMoves: new Map(
			newestFirst.filter(({ failed }) => failed > 0).map(({ fromSlotId, id }) => [fromSlotId, id])
		),
		placesComing: await placesComing(
			tx,
			candidates.map(({ id }) => id)
		)
	};
}

async function candidatesNear(tx: TenantTx, siteId: string, doubtful: SlotAt[], now: Date) {
	const [first, last] = [doubtful[0], doubtful.at(-1)];
	if (!first || !last) return [];
	const near = await comingSlots(
		tx,
		siteId,
		now,
		eq(slot.status, 'open'),
		sql`${slot.capacity} > ${slot.held} + ${slot.sold}`,
		gte(slot.startsAt, new Date(+first.startsAt - targetDays * dayMs)),
		lte(slot.startsAt, new Date(+last.startsAt + targetDays * dayMs))
	);
	return near.filter(({ startsAt }) =>
		doubtful.some((one) => Math.abs(+one.startsAt - +startsAt) <= targetDays * dayMs)
	);
}

async function sumsOf(tx: TenantTx, slotIds: string[]): Promise<Basis['sums']> {
	const rows = await tx.sql
		.select({
			slotId: order.slotId,
			orders: sql<number>`(count(*) filter (where ${order.status} = 'paid'))::int`,
			pending: sql<number>`(count(*) filter (where ${order.status} = 'pending'))::int`,
			amountMinor: sql<number>`coalesce(sum(${payment.amountMinor}) filter (where ${order.status} = 'paid'), 0)::bigint::float8`
		})
		.from(order)
		.leftJoin(payment, eq(payment.orderId, order.id))
		.where(
			and(
				eq(order.operatorId, tx.operatorId),
				inArray(order.slotId, slotIds),
				inArray(order.status, ['paid', 'pending'])
			)
		)
		.groupBy(order.slotId);
	return new Map(rows.map(({ slotId, ...sums }) => [slotId, sums]));
}

/** Slots that a person keeps though they lie in no window of a plan version. */
export async function keptOf(tx: TenantTx, planId: string): Promise<Basis['kept']> {
	const rows = await tx.sql
		.select({ slotId: keptSlot.slotId, byName: keptSlot.keptByName, at: keptSlot.createdAt })
		.from(keptSlot)
		.where(and(eq(keptSlot.operatorId, tx.operatorId), eq(keptSlot.planId, planId)));
	return new Map(rows.map(({ slotId, ...kept }) => [slotId, kept]));
}

/** Computes the windows that a basis asks for; outside of any transaction. */
export function windowsFor({ plan, doubtful, candidates }: Basis): Promise<WindowsOn> {
	return windowsOn(
		plan.body,
		[...doubtful, ...candidates]
			.filter(({ windowPlanId }) => windowPlanId !== plan.id)
			.map(({ localDate }) => localDate)
	);
}

/** How many coming slots a site has, by what is in them. */
export async function countComing(tx: TenantTx, slug: string, now: Date) {
	demand(tx, 'conflicts.decide');
	const { id } = await demandSite(tx, slug);
	const [counts] = await tx.sql
		.select({
			slots: sql<number>`count(*)::int`,
			sold: sql<number>`(count(*) filter (where ${slot.sold} > 0))::int`,
			soldPlaces: sql<number>`coalesce(sum(${slot.sold}), 0)::int`,
			held: sql<number>`(count(*) filter (where ${slot.held} > 0))::int`,
			heldPlaces: sql<number>`coalesce(sum(${slot.held}), 0)::int`,
			free: sql<number>`(count(*) filter (where ${slot.sold} + ${slot.held} = 0))::int`
		})
		.from(slot)
		.where(
			and(
				eq(slot.operatorId, tx.operatorId),
				eq(slot.siteId, id),
				gt(slot.startsAt, now),
				ne(slot.status, 'called_off')
			)
		);
	return counts!;
}
