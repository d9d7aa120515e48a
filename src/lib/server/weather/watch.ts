import { and, eq, gt, lt, ne } from 'drizzle-orm';
import { operator, site, slot, slotForecast } from '../db/schema';
import { inPlatform, inTenant, type TenantTx } from '../db/transaction';
import { demand } from '../auth/rights';
import { addJob } from '../jobs/add';
import type { TaskPayloads } from '../jobs/tasks';
import { log } from '../log';
import { ForecastAway, forecastDays, readHours, type ForecastHour } from './forecast';
import { suggest } from './suggest';

const origin = { actor: { kind: 'worker', name: 'weather watch' } } as const;
const hourMs = 3_600_000;

/** Has the forecast of a site read now. */
export async function askForForecast(tx: TenantTx, siteId: string): Promise<void> {
	demand(tx, 'weather.decide');
	await addForecastJob(tx, siteId);
}

async function addForecastJob(tx: TenantTx, siteId: string): Promise<void> {
	await addJob(
		tx,
		'read_forecast',
		{ operatorId: tx.operatorId, siteId },
		// The next half hour reads it again: no need to try for a day.
		{ key: `forecast-${siteId}`, maxAttempts: 3 }
	);
}

/** The half-hourly round: a job for each site of each open operator that has coming slots. */
export async function readForecasts(): Promise<void> {
	const operators = await inPlatform(origin, (tx) =>
		tx.sql.select({ id: operator.id }).from(operator).where(eq(operator.status, 'open'))
	);
	for (const { id } of operators) {
		await inTenant(id, origin, async (tx) => {
			const sites = await tx.sql
				.selectDistinct({ id: slot.siteId })
				.from(slot)
				.where(and(eq(slot.operatorId, id), ...coming(new Date())));
			for (const found of sites) await addForecastJob(tx, found.id);
		});
	}
}

function coming(now: Date) {
	return [
		gt(slot.endsAt, now),
		lt(slot.startsAt, new Date(now.getTime() + forecastDays * 24 * hourMs)),
		ne(slot.status, 'called_off')
	];
}

/** Reads the forecast of a site and keeps what it suggests for each coming slot. */
export async function readForecast({
	operatorId,
	siteId
}: TaskPayloads['read_forecast']): Promise<void> {
	const place = await inTenant(operatorId, origin, (tx) =>
		tx.sql.query.site.findFirst({
			where: and(eq(site.operatorId, operatorId), eq(site.id, siteId))
		})
	);
	if (!place) return;
	let hours: ForecastHour[];
	try {
		hours = await readHours(place);
	} catch (error) {
		// What was read before stays, with the time of its reading beside it.
		if (error instanceof ForecastAway) log.warn({ err: error }, 'no forecast');
		throw error;
	}
	const readAt = new Date();
	await inTenant(operatorId, origin, async (tx) => {
		const slots = await tx.sql
			.select({ id: slot.id, startsAt: slot.startsAt, endsAt: slot.endsAt })
			.from(slot)
			.where(and(eq(slot.operatorId, operatorId), eq(slot.siteId, siteId), ...coming(readAt)));
		for (const { id: slotId, startsAt, endsAt } of slots) {
			const touched = hours.filter(
				({ until }) => until > startsAt && until.getTime() - hourMs < endsAt.getTime()
			);
			const found = suggest(touched, place);
			if (!found) continue;
			const { suggestion, because, weather } = found;
			const values = { readAt, suggestion, because, ...weather };
			await tx.sql
				.insert(slotForecast)
				.values({ operatorId, slotId, ...values })
				.onConflictDoUpdate({
					target: [slotForecast.operatorId, slotForecast.slotId],
					set: values
				});
		}
	});
}
