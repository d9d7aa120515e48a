import { createSite, zoneSpans } from '../optics';
import { yearTotals, type MonthTotals, type Totals } from '../schedule';
import type { Plan } from '../schemas/plan';
import { planWith, type PlaceQuestion, type Placement } from './question';

/** What a plan gives, to the second. */
export interface PlaceTotals extends Totals {
	/** The calendar years that the season touches; minutes of bow are of all of them. */
	readonly years: readonly number[];
	/** The months that the season touches; what is open and sold in them lies inside the season. */
	readonly months: readonly MonthTotals[];
}

/**
 * Counts the years of a season under a plan by the engine itself, as a year sheet does: the windows of the
 * chosen zone, and what of them lies inside the opening hours and the season.
 * @param question says zone, season and how it is sold; its own plan does not matter
 * @throws RangeError when the plan, the season or the hours are wrong
 */
export function countPlan(question: PlaceQuestion, plan: Plan): PlaceTotals {
	const { zoneIndex, season, pattern, capacity } = question;
	const zone = plan.zones[zoneIndex];
	if (!zone) throw new RangeError(`the plan has no zone ${zoneIndex + 1}`);
	const site = createSite({ ...plan, zones: [zone] });
	const first = Number(season.from.slice(0, 4));
	const years = Array.from(
		{ length: Number(season.to.slice(0, 4)) - first + 1 },
		(_, i) => first + i
	);
	const sum = { bowMinutes: 0, openMinutes: 0, slots: 0, places: 0 };
	const months: MonthTotals[] = [];
	for (const year of years) {
		const range = { from: `${year}-01-01`, to: `${year}-12-31` };
		const windows = [...zoneSpans({ site, zone: site.zones[0]!, ...range })];
		const { clock } = site;
		const totals = yearTotals({ year, windows, clock, pattern, capacity, season });
		for (const key of ['bowMinutes', 'openMinutes', 'slots', 'places'] as const) {
			sum[key] += totals.year[key];
		}
		months.push(
			...totals.months.filter(
				({ month }) => month >= season.from.slice(0, 7) && month <= season.to.slice(0, 7)
			)
		);
	}
	return { ...sum, years, months };
}

/** Counts the plan with the curtain at a placement; null: the plan as it stands. */
export function countPlacement(question: PlaceQuestion, placement: Placement | null): PlaceTotals {
	return countPlan(question, placement ? planWith(question, placement) : question.plan);
}
