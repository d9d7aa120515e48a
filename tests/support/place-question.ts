import { createSite, zoneSpans } from '../../src/lib/optics';
import { planWith, type PlaceQuestion, type Placement } from '../../src/lib/place-search/question';
import { openIntervals, type OpeningSpan } from '../../src/lib/schedule';
import type { Plan } from '../../src/lib/schemas/plan';

const everyDay = (spans: OpeningSpan[]) => [spans, spans, spans, spans, spans, spans, spans];

/** A question about a plan: a curtain of eight metres in a square of thirty, sold from 9 to 18 o'clock. */
export function placeQuestion(plan: Plan, parts: Partial<PlaceQuestion> = {}): PlaceQuestion {
	return {
		plan,
		zoneIndex: 0,
		replaces: null,
		curtain: { lengthM: 8, bottomM: 0.3, topM: 6, dropDiameterUm: 400 },
		area: [
			[-15, -15],
			[15, -15],
			[15, 15],
			[-15, 15]
		],
		season: { from: '2027-04-01', to: '2027-10-31' },
		pattern: {
			lengthMinutes: 20,
			gapMinutes: 10,
			gridMinutes: 10,
			hours: { weekdays: everyDay([{ fromMinute: 540, toMinute: 1080 }]), daysOff: [] }
		},
		capacity: 12,
		...parts
	};
}

/** The terrace of the example as a search finds it: its west curtain is sought a place for, round the zone. */
export const terraceQuestion = (plan: Plan, parts: Partial<PlaceQuestion> = {}): PlaceQuestion =>
	placeQuestion(plan, {
		replaces: 0,
		curtain: { lengthM: 16, bottomM: 0.3, topM: 6.5, dropDiameterUm: 420 },
		area: [
			[-20, -7],
			[-7, -7],
			[-7, 6],
			[7, 6],
			[7, -7],
			[20, -7],
			[20, 20],
			[-20, 20]
		],
		...parts
	});

/** A regular grid of placements over a square about the datum. */
export function gridOf(halfM: number, perSide: number, bearings: number): Placement[] {
	const at = (i: number) => -halfM + (2 * halfM * i) / (perSide - 1);
	const places: Placement[] = [];
	for (let i = 0; i < perSide; i++) {
		for (let j = 0; j < perSide; j++) {
			for (let k = 0; k < bearings; k++) {
				places.push({ x: at(i), y: at(j), bearingDeg: (180 * k) / bearings });
			}
		}
	}
	return places;
}

/** Sellable minutes of a placement in the season alone, by the engine, to the second. */
export function seasonMinutes(question: PlaceQuestion, placement: Placement): number {
	const plan = planWith(question, placement);
	const site = createSite({ ...plan, zones: [plan.zones[question.zoneIndex]!] });
	const { clock } = site;
	const { hours } = question.pattern;
	let ms = 0;
	for (const { startMs, endMs } of zoneSpans({ site, zone: site.zones[0]!, ...question.season })) {
		for (const open of openIntervals({ clock, hours, startMs, endMs })) {
			ms += open.endMs - open.startMs;
		}
	}
	return ms / 60_000;
}
