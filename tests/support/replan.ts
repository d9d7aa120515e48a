import { createSite, findWindows, type BowWindow } from '../../src/lib/optics/index.ts';
import type { Plan } from '../../src/lib/schemas/plan.ts';
import { addPlan } from '../../src/lib/server/sites/plans.ts';
import { quarryPlan } from '../../src/lib/server/demo/plans.ts';
import type { Shop } from './shop.ts';

type Slot = Shop['slots'][number];

export interface Replan {
	body: Plan;
	/** Its windows over the shop's season, by the engine, the whole range at once. */
	windows: readonly BowWindow[];
	/** The shop's slots that lie in none of them, and those that do, in order of time. */
	outside: Slot[];
	inside: Slot[];
}

/**
 * The shop's plan with a rule that wants the sun higher: whatever the season, some of its slots fall out of
 * the windows and more stay.
 */
export function higherSun(shop: Shop, least = { outside: 8, inside: 20 }): Replan {
	const [from, to] = [shop.slots[0]!.localDate, shop.slots.at(-1)!.localDate];
	for (let altitudeDeg = 4; altitudeDeg < 40; altitudeDeg++) {
		const body = {
			...quarryPlan,
			rule: { ...quarryPlan.rule, minimumSunAltitude: altitudeDeg }
		};
		const [{ windows } = { windows: [] }] = findWindows({ site: createSite(body), from, to });
		const lies = ({ startsAt, endsAt }: Slot) =>
			windows.some(({ startMs, endMs }) => startMs <= +startsAt && +endsAt <= endMs);
		const inside = shop.slots.filter(lies);
		const outside = shop.slots.filter((one) => !lies(one));
		if (outside.length >= least.outside && inside.length >= least.inside) {
			return { body, windows, outside, inside };
		}
	}
	throw new Error('no altitude parts the slots of this season');
}

/** Adds a plan version to the shop's site. @returns its number */
export function addVersion(shop: Shop, body: Plan): Promise<number> {
	return shop.asOwner((tx) => addPlan(tx, shop.site.slug, body));
}
