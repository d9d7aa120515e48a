import { createSite, daylight, windowsInPieces, type BowWindow } from '../optics';
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

/**
 * The windows and the daylight of a zone's year in pieces, in order; together they are what
 * `findWindows` and `daylight` give for the year.
 * @param signal stops the work between two pieces
 * @throws RangeError when the plan or the year is wrong; the signal's reason when it is aborted
 */
export async function* yearPieces({
	plan,
	zoneIndex,
	year,
	signal
}: {
	plan: Plan;
	zoneIndex: number;
	year: number;
	signal?: AbortSignal;
}): AsyncGenerator<YearPiece> {
	const site = createSite(planOfZone(plan, zoneIndex));
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
