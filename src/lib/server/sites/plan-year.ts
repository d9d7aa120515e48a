import { createSite, windowsInPieces, type BowWindow } from '../../optics';
import type { Plan } from '../../schemas/plan';

/** A plan's windows of a calendar year, zone by zone. */
export interface PlanYear {
	year: number;
	zones: { zone: string; windows: BowWindow[] }[];
}

/** Longer than this nobody waits for a sheet; the year sheet shows such a plan while it computes. */
const MOST_MS = 20_000;

/**
 * Computes the year of a plan of any state, giving way to other requests in between.
 * @returns null when it would take too long
 */
export async function yearOfPlan(plan: Plan, year: number): Promise<PlanYear | null> {
	const site = createSite(plan);
	const zones = site.zones.map(({ name }) => ({ zone: name, windows: [] as BowWindow[] }));
	const range = { from: `${year}-01-01`, to: `${year}-12-31` };
	const startedMs = performance.now();
	for await (const piece of windowsInPieces({ site, ...range, daysPerPiece: 1 })) {
		piece.zones.forEach(({ windows }, i) => zones[i]!.windows.push(...windows));
		if (performance.now() - startedMs > MOST_MS) return null;
	}
	return { year, zones };
}
