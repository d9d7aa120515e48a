import { createHash } from 'node:crypto';
import { createSite, stateAt, windowsInPieces, type BowWindow, type Site } from '../../optics';
import { addDays, localDayRange, type LocalDate } from '../../schedule';
import type { Plan } from '../../schemas/plan';
import { canonicalJson } from '../../canonical';
import { engineVersion } from './compute';

/** Windows of the zones of a plan on the dates that were asked for. */
export interface WindowsOn {
	/** Windows of a zone that a slot of a local date can lie in; null when that date was not asked for. */
	of(zone: string, date: LocalDate): readonly BowWindow[] | null;
	hasZone(zone: string): boolean;
}

interface Known {
	site: Site;
	/** Windows by the local date on which they start, then by zone. */
	byDate: Map<LocalDate, Map<string, readonly BowWindow[]>>;
}

/** What was computed last, newest last: a page and its answer ask for the same. */
const known = new Map<string, Known>();
const mostPlans = 6;

function knownOf(body: Plan): Known {
	const key = createHash('sha256')
		.update(canonicalJson({ engineVersion, plan: body }))
		.digest('hex');
	const found = known.get(key) ?? { site: createSite(body), byDate: new Map() };
	known.delete(key);
	known.set(key, found);
	const [oldest] = known.keys();
	if (known.size > mostPlans && oldest !== undefined) known.delete(oldest);
	return found;
}

/** No bow lasts longer from one midnight to another than the sun stays up: half a year, at the poles. */
const mostDaysBack = 200;

/**
 * The windows of a plan around some local dates, by the engine that publishing uses. A day costs some
 * milliseconds; between two days others have their turn, and what was computed is kept for a while.
 */
export async function windowsOn(body: Plan, dates: readonly LocalDate[]): Promise<WindowsOn> {
	const { site, byDate } = knownOf(body);
	const firsts = new Map<LocalDate, LocalDate>();
	const needed = new Set<LocalDate>();
	for (const date of new Set(dates)) {
		const first = firstDateFor(site, date);
		firsts.set(date, first);
		for (let at = first; at <= date; at = addDays(at, 1)) needed.add(at);
	}
	for (const { from, to } of runsOf([...needed].filter((date) => !byDate.has(date)).sort())) {
		for await (const piece of windowsInPieces({ site, from, to, daysPerPiece: 1 })) {
			byDate.set(piece.from, new Map(piece.zones.map(({ zone, windows }) => [zone, windows])));
		}
	}
	return {
		hasZone: (zone) => site.zones.some(({ name }) => name === zone),
		of(zone, date) {
			const first = firsts.get(date);
			if (first === undefined) return null;
			const found: BowWindow[] = [];
			for (let at = first; at <= date; at = addDays(at, 1)) {
				found.push(...(byDate.get(at)?.get(zone) ?? []));
			}
			return found;
		}
	};
}

/** A slot may lie in a window of the day before, and further back for as long as no midnight closed it. */
function firstDateFor(site: Site, date: LocalDate): LocalDate {
	const { timeZone } = site.clock;
	let first = addDays(date, -1);
	for (let back = 0; back < mostDaysBack; back++) {
		const { startMs } = localDayRange({ timeZone, from: first, to: first });
		if (!stateAt(site, startMs).zones.some(({ open }) => open)) break;
		first = addDays(first, -1);
	}
	return first;
}

/** Dates in order, as runs without a gap. */
function runsOf(dates: LocalDate[]): { from: LocalDate; to: LocalDate }[] {
	const runs: { from: LocalDate; to: LocalDate }[] = [];
	for (const date of dates) {
		const last = runs.at(-1);
		if (last && addDays(last.to, 1) === date) last.to = date;
		else runs.push({ from: date, to: date });
	}
	return runs;
}
