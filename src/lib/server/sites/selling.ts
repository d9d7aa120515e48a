import { and, desc, eq } from 'drizzle-orm';
import { demand } from '../auth/rights';
import { programme, zone } from '../db/schema';
import type { TenantTx } from '../db/transaction';

/**
 * How a site's zones are sold, by programme: seasons, hours and slots, without prices. The newest season
 * comes first.
 * @throws Refusal (forbidden)
 */
export function sellingOf(tx: TenantTx, siteId: string) {
	demand(tx, 'sites.read');
	return tx.sql
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
		.where(and(eq(programme.operatorId, tx.operatorId), eq(programme.siteId, siteId)))
		.orderBy(desc(programme.seasonFrom), programme.name);
}
