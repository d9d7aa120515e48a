import { setTimeout as wait } from 'node:timers/promises';
import { addDays, localClock } from '../../schedule';
import type { Plan } from '../../schemas/plan';
import { inTenant, type Origin } from '../db/transaction';
import { listZones, saveProgramme, type PriceWanted } from '../programmes/programmes';
import { previewProgramme, publishProgramme } from '../programmes/publish';
import { askForWindows, computeWindows, demandComputation } from '../sites/compute';
import { addPlan, makeLive } from '../sites/plans';
import { changeSite, createSite, demandSite } from '../sites/sites';

export interface DemoSite {
	plan: Plan;
	currency: string;
	description: string;
	arrival: string;
	capacity: number;
	prices: Omit<PriceWanted, 'id'>[];
}

const weekday = [{ from: '07:00', to: '21:00' }];

/**
 * Makes a site with its plan live, its season computed and its programme published: the same calls, in
 * the same order, as the screens make.
 */
export async function makeDemoSite(
	operatorId: string,
	origin: Origin,
	{ plan, currency, description, arrival, capacity, prices }: DemoSite,
	now: Date
): Promise<{ slug: string; siteId: string; programmeId: string }> {
	const { id: siteId, slug } = await inTenant(operatorId, origin, (tx) =>
		createSite(tx, {
			name: plan.name ?? 'Site',
			latitudeDeg: plan.latitude,
			longitudeDeg: plan.longitude,
			elevationM: plan.elevation,
			timeZone: plan.timeZone,
			currency
		})
	);
	await inTenant(operatorId, origin, async (tx) => {
		const { name, latitudeDeg, longitudeDeg, elevationM, timeZone, gustLimitMs } = await demandSite(
			tx,
			slug
		);
		const place = { name, latitudeDeg, longitudeDeg, elevationM, timeZone, gustLimitMs, currency };
		await changeSite(tx, slug, { ...place, description, arrival, pictureAlt: '', open: true });
		await makeLive(tx, slug, await addPlan(tx, slug, plan));
	});
	const today = localClock(plan.timeZone).dateAt(now.getTime());
	const season = { from: addDays(today, -3), to: addDays(today, 45) };
	const computationId = await inTenant(operatorId, origin, (tx) =>
		askForWindows(tx, siteId, season)
	);
	// The worker does the same; whichever comes first, this goes on when it is done.
	await computeWindows({ operatorId, computationId }, { number: 1, of: 1 });
	await waitForWindows(operatorId, origin, computationId);
	const programmeId = await inTenant(operatorId, origin, async (tx) => {
		const [zone] = await listZones(tx, siteId);
		return saveProgramme(
			tx,
			{ slug, id: null },
			{
				name: 'Daily visits',
				zoneId: zone!.id,
				seasonFrom: season.from,
				seasonTo: season.to,
				openingHours: Array.from({ length: 7 }, () => weekday),
				daysOff: [addDays(today, 9)],
				slotMinutes: 20,
				gapMinutes: 10,
				gridMinutes: 10,
				capacity,
				refundPolicy: { untilHoursBefore: 24, percent: 100 },
				prices: prices.map((price) => ({ id: '', ...price }))
			}
		);
	});
	return { slug, siteId, programmeId };
}

/** Publishes a programme as its preview says. */
export async function publishDemoProgramme(
	operatorId: string,
	origin: Origin,
	{ slug, programmeId }: { slug: string; programmeId: string },
	now: Date
): Promise<void> {
	await inTenant(operatorId, origin, async (tx) => {
		const { digest } = await previewProgramme(tx, slug, programmeId, now);
		await publishProgramme(tx, slug, programmeId, digest, now);
	});
}

const waitSteps = 600;
const stepMs = 100;

async function waitForWindows(operatorId: string, origin: Origin, id: string): Promise<void> {
	for (let step = 0; step < waitSteps; step++) {
		const { state } = await inTenant(operatorId, origin, (tx) => demandComputation(tx, id));
		if (state === 'done') return;
		await wait(stepMs);
	}
	throw new Error('the windows of the demo were not computed');
}
