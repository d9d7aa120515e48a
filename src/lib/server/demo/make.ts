import { addDays, localClock } from '../../schedule';
import { inTenant } from '../db/transaction';
import {
	changeSeller,
	readPaymentAccount,
	refreshAccount,
	openPaymentAccount
} from '../payments/accounts';
import { addWaterEntry } from '../sites/water';
import { askForForecast } from '../weather/watch';
import { askDouble, makeDemoOrders } from './orders';
import { makeDemoPeople } from './people';
import { kilnPlan, quarryPlan } from './plans';
import { makeDemoSite, publishDemoProgramme } from './sites';

/** The whole demo: people, two sites in two countries and currencies, a season, orders, a call-off. */
export async function makeDemo(now: Date) {
	const people = await makeDemoPeople();
	const { operatorId, owner } = people;
	const origin = {
		actor: { kind: 'member', role: 'owner', ...owner },
		requestId: 'demo'
	} as const;
	await inTenant(operatorId, origin, (tx) =>
		changeSeller(tx, {
			name: 'Hollin Mist Gardens',
			street: '4 Kiln Lane',
			postcode: '1020',
			city: 'Hollin',
			country: 'AT',
			taxId: 'ATU00000000',
			email: 'office@hollin.example.org'
		})
	);
	await openPaymentAccount(operatorId, origin);
	const account = await inTenant(operatorId, origin, readPaymentAccount);
	await askDouble(`accounts/${account!.accountId}/complete`, {});
	await refreshAccount(operatorId, origin);

	const quarry = await makeDemoSite(
		operatorId,
		origin,
		{
			plan: quarryPlan,
			currency: 'EUR',
			description:
				'An old quarry floor with two curtains of mist. Visits last twenty minutes and begin when the bow stands.',
			arrival:
				'From the lower gate it is ten minutes on foot, on gravel. Bring a coat: the mist drifts.',
			capacity: 12,
			prices: [
				{ name: 'Adult', amountMinor: 1600, taxPercent: '10' },
				{ name: 'Child', amountMinor: 800, taxPercent: '10' }
			]
		},
		now
	);
	await publishDemoProgramme(operatorId, origin, quarry, now);
	const kiln = await makeDemoSite(
		operatorId,
		origin,
		{
			plan: kilnPlan,
			currency: 'JPY',
			description: 'A gravel court before a long curtain of fine mist, by the sea.',
			arrival: 'The court is level and open from the street.',
			capacity: 20,
			prices: [
				{ name: 'Adult', amountMinor: 1500, taxPercent: '10' },
				{ name: 'Child', amountMinor: 700, taxPercent: '10' }
			]
		},
		now
	);
	await publishDemoProgramme(operatorId, origin, kiln, now);
	await makeDemoOrders(
		operatorId,
		origin,
		{ siteId: quarry.siteId, timeZone: quarryPlan.timeZone },
		now
	);
	const today = localClock(quarryPlan.timeZone).dateAt(now.getTime());
	for (const [kind, ago, note] of [
		['sample', 20, 'Laboratory of the district, nothing found.'],
		['disinfection', 6, 'Tank, lines and nozzles.']
	] as const) {
		await inTenant(operatorId, origin, (tx) =>
			addWaterEntry(
				tx,
				quarry.slug,
				{ kind, doneOn: addDays(today, -ago), nextDueOn: addDays(today, 30 - ago), note },
				now
			)
		);
	}
	for (const { siteId } of [quarry, kiln]) {
		await inTenant(operatorId, origin, (tx) => askForForecast(tx, siteId));
	}
	return people;
}
