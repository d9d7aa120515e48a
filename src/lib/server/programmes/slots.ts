import { and, asc, eq, gte, lte, ne } from 'drizzle-orm';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { lockSlots } from '../booking/move';
import { movesUnderWay } from '../booking/move-slot';
import { programme, site, slot, slotForecast, zone } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';

/** Slots with what was sold and what the weather watch says, in order of time. */
export function listSlots(
	tx: TenantTx,
	{ from, to, siteId }: { from: Date; to: Date; siteId?: string }
) {
	demand(tx, 'sites.read');
	return tx.sql
		.select({
			id: slot.id,
			site: site.name,
			siteSlug: site.slug,
			siteId: slot.siteId,
			timeZone: site.timeZone,
			zone: zone.name,
			programme: programme.name,
			localDate: slot.localDate,
			startsAt: slot.startsAt,
			endsAt: slot.endsAt,
			status: slot.status,
			capacity: slot.capacity,
			held: slot.held,
			sold: slot.sold,
			arcDeg: slot.arcDeg,
			dropDiameterUm: slot.dropDiameterUm,
			suggestion: slotForecast.suggestion,
			because: slotForecast.because,
			readAt: slotForecast.readAt
		})
		.from(slot)
		.innerJoin(site, eq(site.id, slot.siteId))
		.innerJoin(zone, eq(zone.id, slot.zoneId))
		.innerJoin(programme, eq(programme.id, slot.programmeId))
		.leftJoin(slotForecast, eq(slotForecast.slotId, slot.id))
		.where(
			and(
				eq(slot.operatorId, tx.operatorId),
				gte(slot.endsAt, from),
				lte(slot.startsAt, to),
				...(siteId ? [eq(slot.siteId, siteId)] : [])
			)
		)
		.orderBy(asc(slot.startsAt))
		.limit(3000);
}

export type ListedSlot = Awaited<ReturnType<typeof listSlots>>[number];

/** Stops selling a slot, or sells it again; what was sold stays valid. */
export async function setSlotPaused(tx: TenantTx, slotId: string, paused: boolean): Promise<void> {
	demand(tx, 'programmes.write');
	const status = paused ? 'paused' : 'open';
	await lockSlots(tx, [slotId]);
	if (!paused && (await movesUnderWay(tx, { slotIds: [slotId] })).size > 0) {
		throw new Refusal(
			'conflict',
			'The slot is being moved: it is not for sale until that is done.'
		);
	}
	const changed = await tx.sql
		.update(slot)
		.set({ status })
		.where(
			and(eq(slot.operatorId, tx.operatorId), eq(slot.id, slotId), ne(slot.status, 'called_off'))
		)
		.returning({ id: slot.id });
	if (changed.length === 0) {
		throw new Refusal('not_found', 'There is no such slot, or it is called off.');
	}
	await addToTrail(tx, {
		action: paused ? 'slot.paused' : 'slot.opened',
		subject: { type: 'slot', id: slotId },
		after: { status }
	});
}
