import { bowStrip, type BowStrip } from '../bow-strip';
import type { DayBandData } from '../day-band';
import { seenArcs, stateAt, sunPosition, type BowWindow, type Site } from '../optics';
import { localDayRange, type Interval, type LaidSlot, type LocalDate } from '../schedule';
import type { Plan } from '../schemas/plan';
import { siteOfZone } from './year-pieces';

/** One day of a year sheet, large. */
export interface ChosenDay {
	readonly band: DayBandData;
	/** Windows that reach into the day, whole, in order. */
	readonly windows: readonly BowWindow[];
	readonly slots: readonly LaidSlot[];
}

/** Picks a day out of what is known of the year. */
export function chosenDay({
	date,
	timeZone,
	windows,
	daylight,
	slots
}: {
	date: LocalDate;
	timeZone: string;
	windows: readonly BowWindow[];
	daylight: readonly Interval[];
	slots: readonly LaidSlot[];
}): ChosenDay {
	const { startMs, endMs } = localDayRange({ timeZone, from: date, to: date });
	const touches = (one: Interval) => one.endMs > startMs && one.startMs < endMs;
	const held = (one: Interval) => ({
		startMs: Math.max(startMs, one.startMs),
		endMs: Math.min(endMs, one.endMs)
	});
	const here = windows.filter(touches);
	const laid = slots.filter((slot) => slot.date === date);
	return {
		band: {
			date,
			timeZone,
			startMs,
			endMs,
			daylight: daylight.filter(touches).map(held),
			windows: here.map((one) => ({ ...held(one), arcDeg: one.peakArcDeg })),
			slots: laid.map((one) => ({ ...held(one), state: 'free' as const }))
		},
		windows: here,
		slots: laid
	};
}

/** A plan's zone with what is dear to work out again for every day. */
export interface ZoneLook {
	/** The colours in the middle of a window, of the curtain that shows most of the bow there. */
	stripOf(window: BowWindow): BowStrip | null;
}

const strips = new Map<number, BowStrip>();

function stripOfDrops(dropDiameterUm: number): BowStrip {
	const known = strips.get(dropDiameterUm) ?? bowStrip(dropDiameterUm);
	strips.set(dropDiameterUm, known);
	return known;
}

function mainDropDiameter(plan: Plan, site: Site, instantMs: number): number | null {
	const [zone] = stateAt(site, instantMs).zones;
	const eye = zone?.eyes.reduce((a, b) => (b.arcDeg > a.arcDeg ? b : a));
	if (!eye) return null;
	const lengths = plan.curtains.map(() => 0);
	for (const arc of seenArcs({ site, eye, sun: sunPosition({ instantMs, ...site }) })) {
		lengths[arc.curtainIndex]! += arc.endDeg - arc.startDeg;
	}
	return plan.curtains[lengths.indexOf(Math.max(...lengths))]?.dropDiameter ?? null;
}

/** Looks at a zone of a plan. @throws RangeError when the plan is wrong or has no such zone */
export function zoneLook(plan: Plan, zoneIndex: number): ZoneLook {
	const site = siteOfZone(plan, zoneIndex);
	return {
		stripOf({ startMs, endMs }) {
			const drops = mainDropDiameter(plan, site, (startMs + endMs) / 2);
			return drops === null ? null : stripOfDrops(drops);
		}
	};
}
