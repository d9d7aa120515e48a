import { and, eq, gt, inArray, ne, or, sql } from 'drizzle-orm';
import { createHash } from 'node:crypto';
import { localClock } from '../../schedule';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { lockSlots } from '../booking/move';
import { violates } from '../db/errors';
import {
	keptSlot,
	order,
	orderMove,
	programme,
	slot,
	slotForecast,
	slotMove,
	ticket,
	weatherCallSlot,
	zone
} from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { sellingObstacles } from '../payments/accounts';
import { findComputation, readWindows } from '../sites/compute';
import { demandSite, livePlan } from '../sites/sites';
import { waterWarnings } from '../sites/water';
import { viewFrom, type ViewAt } from '../sites/view';
import { findDifference, type Difference } from './difference';
import { demandProgramme } from './programmes';

export interface Preview {
	/** Null when no finished computation of the live plan covers the season. */
	difference: Difference | null;
	/** Names this very difference: what is published is what was looked at. */
	digest: string;
	/** Why it can not be sold yet, in words. */
	obstacles: string[];
	/** What should be looked at before people breathe the mist; it stops nothing. */
	cautions: string[];
}

/** What publishing a programme would do now. */
export async function previewProgramme(
	tx: TenantTx,
	slug: string,
	programmeId: string,
	now: Date
): Promise<Preview> {
	const site = await demandSite(tx, slug);
	const { programme: found, prices } = await demandProgramme(tx, site.id, programmeId);
	const obstacles = await sellingObstacles(tx);
	if (prices.length === 0) obstacles.push('The programme has no price.');
	const today = localClock(site.timeZone).dateAt(now.getTime());
	const cautions = await waterWarnings(tx, site.id, today);
	const season = { from: found.seasonFrom, to: found.seasonTo };
	const computed = await findComputation(tx, site.id, season);
	if (!computed) return { difference: null, digest: '', obstacles, cautions };
	const windows = await readWindows(tx, computed.id, { ...season, zoneId: found.zoneId });
	const slots = await tx.sql.query.slot.findMany({
		where: and(
			eq(slot.operatorId, tx.operatorId),
			eq(slot.zoneId, found.zoneId),
			gt(slot.startsAt, now),
			// What the weather called off is not offered anew; what was merely taken back leaves no mark.
			or(ne(slot.status, 'called_off'), inArray(slot.id, calledOffByWeather(tx)))
		),
		orderBy: slot.startsAt
	});
	const difference = findDifference({
		programme: found,
		timeZone: site.timeZone,
		windows,
		slots,
		now
	});
	return { difference, digest: digestOf(difference), obstacles, cautions };
}

function calledOffByWeather(tx: TenantTx) {
	return tx.sql
		.select({ id: weatherCallSlot.slotId })
		.from(weatherCallSlot)
		.where(eq(weatherCallSlot.operatorId, tx.operatorId));
}

function digestOf({ added, kept, removed, staying }: Difference): string {
	const told = {
		added: added.map((one) => [one.window.id, one.startsAt.getTime(), one.endsAt.getTime()]),
		kept: kept.map((one) => [one.slot.id, one.capacity, one.window.id]),
		removed: removed.map(({ id }) => id),
		staying: staying.map((one) => one.slot.id)
	};
	return createHash('sha256').update(JSON.stringify(told)).digest('base64url').slice(0, 22);
}

/**
 * Publishes a programme: adds, keeps and removes slots as the preview said. Sold and held slots stay.
 * @param digest of the preview that the planner has seen
 * @throws Refusal when something has changed since, so that it is looked at again
 */
export async function publishProgramme(
	tx: TenantTx,
	slug: string,
	programmeId: string,
	digest: string,
	now: Date
): Promise<{ added: number; removed: number; kept: number }> {
	demand(tx, 'programmes.write');
	const site = await demandSite(tx, slug);
	const { programme: found } = await demandProgramme(tx, site.id, programmeId);
	// Two planners who publish for one zone do so one after the other.
	await tx.sql.select({ id: zone.id }).from(zone).where(eq(zone.id, found.zoneId)).for('update');
	const {
		difference,
		digest: present,
		obstacles
	} = await previewProgramme(tx, slug, found.id, now);
	if (!difference)
		throw new Refusal('conflict', 'The windows of this season are not computed yet.');
	if (obstacles.length > 0) throw new Refusal('conflict', obstacles.join(' '));
	if (present !== digest) {
		throw new Refusal('conflict', 'Something has changed since you looked. See what it does now.');
	}
	// At once and in order, as everybody who needs several slots does.
	await lockSlots(
		tx,
		[...difference.removed, ...difference.kept.map(({ slot }) => slot)].map(({ id }) => id)
	);
	try {
		await removeSlots(tx, difference);
		await keepSlots(tx, difference);
		await addSlots(tx, found, difference, viewFrom(await demandLivePlan(tx, site.id)));
	} catch (error) {
		if (violates(error, 'slot_no_overlap') || violates(error, 'slot_places')) {
			throw new Refusal('conflict', 'Somebody has just bought there. See what it does now.');
		}
		throw error;
	}
	await tx.sql.update(programme).set({ publishedAt: now }).where(eq(programme.id, found.id));
	const counts = {
		added: difference.added.length,
		removed: difference.removed.length,
		kept: difference.kept.length
	};
	await addToTrail(tx, {
		action: 'programme.published',
		subject: { type: 'programme', id: found.id },
		after: { ...counts, staying: difference.staying.length }
	});
	return counts;
}

async function removeSlots(tx: TenantTx, { removed }: Difference): Promise<void> {
	if (removed.length === 0) return;
	const ids = removed.map(({ id }) => id);
	const named = await spokenOf(tx, ids);
	// Somebody held places and let them lapse, or was moved: that speaks of the slot, which stays as
	// called off.
	const silent = ids.filter((id) => !named.has(id));
	if (silent.length > 0) {
		await tx.sql.delete(slotForecast).where(inArray(slotForecast.slotId, silent));
		const gone = await tx.sql
			.delete(slot)
			.where(and(inArray(slot.id, silent), eq(slot.sold, 0), eq(slot.held, 0)))
			.returning({ id: slot.id });
		demandAll(gone.length, silent.length);
	}
	if (named.size > 0) {
		const off = await tx.sql
			.update(slot)
			.set({ status: 'called_off' })
			.where(and(inArray(slot.id, [...named]), eq(slot.sold, 0), eq(slot.held, 0)))
			.returning({ id: slot.id });
		demandAll(off.length, named.size);
	}
}

const speaking = [
	order.slotId,
	ticket.slotId,
	orderMove.fromSlotId,
	orderMove.toSlotId,
	slotMove.fromSlotId,
	slotMove.toSlotId,
	keptSlot.slotId
];

/** Slots that orders, moves or decisions speak of. */
async function spokenOf(tx: TenantTx, slotIds: string[]): Promise<Set<string>> {
	const said = new Set<string>();
	for (const column of speaking) {
		const rows = await tx.sql
			.selectDistinct({ id: sql<string>`${column}` })
			.from(column.table)
			.where(and(sql`operator_id = ${tx.operatorId}`, inArray(column, slotIds)));
		for (const { id } of rows) said.add(id);
	}
	return said;
}

async function demandLivePlan(tx: TenantTx, siteId: string) {
	const live = await livePlan(tx, siteId);
	if (!live) throw new Refusal('conflict', 'No plan version is live.');
	return live.body;
}

function demandAll(done: number, wanted: number): void {
	if (done === wanted) return;
	throw new Refusal('conflict', 'Somebody has just bought there. See what it does now.');
}

async function keepSlots(tx: TenantTx, { kept }: Difference): Promise<void> {
	for (const { slot: found, window, capacity } of kept) {
		if (found.windowId === window.id && found.capacity === capacity) continue;
		await tx.sql
			.update(slot)
			.set({
				windowId: window.id,
				windowStartsAt: window.startsAt,
				windowEndsAt: window.endsAt,
				capacity
			})
			.where(eq(slot.id, found.id));
	}
}

async function addSlots(
	tx: TenantTx,
	found: typeof programme.$inferSelect,
	{ added }: Difference,
	viewAt: ViewAt
): Promise<void> {
	for (let at = 0; at < added.length; at += 500) {
		await tx.sql.insert(slot).values(
			added.slice(at, at + 500).map((one) => ({
				operatorId: tx.operatorId,
				siteId: found.siteId,
				zoneId: found.zoneId,
				programmeId: found.id,
				windowId: one.window.id,
				windowStartsAt: one.window.startsAt,
				windowEndsAt: one.window.endsAt,
				startsAt: one.startsAt,
				endsAt: one.endsAt,
				localDate: one.localDate,
				capacity: found.capacity,
				...viewAt(one.window.zone, one)
			}))
		);
	}
}
