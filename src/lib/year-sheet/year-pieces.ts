import {
	createSite,
	daylight,
	stateAt,
	windowsInPieces,
	type BowWindow,
	type Site
} from '../optics';
import { addDays, localDayRange, type Interval } from '../schedule';
import type { Plan } from '../schemas/plan';
import { yearRange } from './sheet';

/** A piece of a year, as soon as it is known. */
export interface YearPiece {
	readonly windows: readonly BowWindow[];
	readonly daylight: readonly Interval[];
	readonly daysDone: number;
	readonly daysInAll: number;
}

/** Days of the first pieces: something is seen at once, and later pieces cost fewer messages. */
const firstPieces = [1, 1, 2, 3];
const DAYS_PER_PIECE = 7;

/** A plan with one of its zones alone, under the name that it has among the others. */
export function planOfZone(plan: Plan, zoneIndex: number): Plan {
	const zone = plan.zones[zoneIndex];
	if (!zone) throw new RangeError(`the plan has no zone ${zoneIndex + 1}`);
	return { ...plan, zones: [{ ...zone, name: zone.name ?? `Zone ${zoneIndex + 1}` }] };
}

/** The site with one of its zones alone. @throws RangeError when the plan is wrong or has no such zone */
export function siteOfZone(plan: Plan, zoneIndex: number): Site {
	return createSite(planOfZone(plan, zoneIndex));
}

/**
 * The windows and the daylight of a zone's year in pieces, in order; together they are what
 * `findWindows` and `daylight` give for the year.
 * @param signal stops the work between two pieces
 * @param site of one zone
 * @throws RangeError when the year is wrong; the signal's reason when it is aborted
 */
export async function* yearPieces({
	site,
	year,
	signal
}: {
	site: Site;
	year: number;
	signal?: AbortSignal;
}): AsyncGenerator<YearPiece> {
	const { timeZone } = site.clock;
	const { from, to } = yearRange(year);
	const daysInAll = localDayRange({ timeZone, from, to }).days;
	const ranges = [...firstPieces, Infinity];
	let done = 0;
	for (const days of ranges) {
		const rangeFrom = addDays(from, done);
		const rangeTo = days === Infinity ? to : addDays(rangeFrom, days - 1);
		const pieces = windowsInPieces({
			site,
			from: rangeFrom,
			to: rangeTo,
			daysPerPiece: Math.min(days, DAYS_PER_PIECE),
			...(signal ? { signal } : {})
		});
		for await (const piece of pieces) {
			yield {
				windows: piece.zones[0]?.windows ?? [],
				daylight: daylight({
					...site,
					...localDayRange({ timeZone, from: piece.from, to: piece.to })
				}),
				daysDone: done + piece.daysDone,
				daysInAll
			};
		}
		done += days;
	}
}

/** How much of the bow there is in a part of a window. */
export interface Shade extends Interval {
	/** Share of the zone's eyes that have the bow about the middle of the part, 0 to 1. */
	readonly share: number;
	/** Median arc of those eyes then, degrees; 0 when none has it. */
	readonly arcDeg: number;
}

/** Length of a part: in ten minutes the sun moves about two and a half degrees. */
const SHADE_MS = 600_000;

/**
 * A window in parts that end at whole ten minutes UTC. Each is looked at in its middle, or at the window's
 * end that is nearest to it: instants among which the engine finds the window's peaks, so no part shows
 * more than they.
 */
export function shadesOf(site: Site, { startMs, endMs }: Interval): Shade[] {
	const shades: Shade[] = [];
	for (let partStart = startMs; partStart < endMs;) {
		const gridStart = Math.floor(partStart / SHADE_MS) * SHADE_MS;
		const partEnd = Math.min(endMs, gridStart + SHADE_MS);
		const middle = Math.min(endMs, Math.max(startMs, gridStart + SHADE_MS / 2));
		const zone = stateAt(site, middle).zones[0]!;
		const arcs = zone.eyes
			.map(({ arcDeg }) => arcDeg)
			.filter((arcDeg) => arcDeg >= site.minimumArcDeg)
			.sort((a, b) => a - b);
		const above = arcs[Math.floor(arcs.length / 2)] ?? 0;
		const below = arcs[Math.ceil(arcs.length / 2) - 1] ?? 0;
		shades.push({
			startMs: partStart,
			endMs: partEnd,
			share: zone.share,
			arcDeg: (above + below) / 2
		});
		partStart = partEnd;
	}
	return shades;
}
