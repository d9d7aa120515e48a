import {
	findWindows,
	seenArcs,
	sunIsUp,
	type Eye,
	type SeenArc,
	type Site,
	type SiteState,
	type SunPosition,
	type ZoneState
} from '../optics';
import { formatShare } from '../format';
import type { DayBandData } from '../day-band';
import { daylight } from '../optics';
import type { TableDay } from './moment';
import { middleOfOutline } from './geometry';
import type { PlanZone } from '../schemas/plan';

/** A place where a visitor may stand, with the arc at each eye height, lowest listed first in the plan. */
export interface Spot {
	x: number;
	y: number;
	/** Degrees of bow for each eye height of the zone, in the plan's order. */
	arcsDeg: number[];
	/** The least of them: what everybody there sees. */
	leastArcDeg: number;
}

/** The eyes of a zone gathered by place: eyes of one place follow each other in the engine's list. */
export function spotsOf(zone: ZoneState, eyeHeights: number): Spot[] {
	const spots: Spot[] = [];
	for (let i = 0; i < zone.eyes.length; i += eyeHeights) {
		const eyes = zone.eyes.slice(i, i + eyeHeights);
		const arcsDeg = eyes.map(({ arcDeg }) => arcDeg);
		spots.push({ x: eyes[0]!.x, y: eyes[0]!.y, arcsDeg, leastArcDeg: Math.min(...arcsDeg) });
	}
	return spots;
}

/** The eye that stands for a zone: at the lattice's point nearest its middle, first eye height. */
export function middleEye(site: Site, zone: PlanZone, index: number): Eye | null {
	const eyes = site.zones[index]?.eyes ?? [];
	const [x, y] = middleOfOutline(zone.outline);
	let best: Eye | null = null;
	let least = Infinity;
	for (const eye of eyes) {
		const far = Math.hypot(eye.x - x, eye.y - y);
		if (far < least - 1e-9) [best, least] = [eye, far];
	}
	return best;
}

/** The part of a curtain that carries the bow for an eye, metres from its `from` end. */
export interface LitPart {
	curtainIndex: number;
	startM: number;
	endM: number;
}

/** The pieces of the bow that an eye sees, fine enough to draw. Nothing when the sun is not up. */
export function arcsFor(site: Site, eye: Eye, sun: SunPosition): SeenArc[] {
	return sun.altitudeDeg > 0 ? seenArcs({ site, eye, sun, spacingDeg: 4 }) : [];
}

/** Which parts of which curtains carry the bow. */
export function litParts(arcs: readonly SeenArc[]): LitPart[] {
	return arcs.flatMap(({ curtainIndex, points }) => {
		const along = points.map(({ alongM }) => alongM);
		if (along.length < 2) return [];
		// The ends are exact but for rounding: minus zero would be written as -0.0.
		const startM = Math.max(0, Math.min(...along));
		return [{ curtainIndex, startM, endM: Math.max(...along) }];
	});
}

/** Middle value of the arcs of the eyes that have the bow; null when none has. */
export function medianArcDeg(zone: ZoneState, minimumArcDeg: number): number | null {
	const arcs = zone.eyes
		.map(({ arcDeg }) => arcDeg)
		.filter((arc) => arc >= minimumArcDeg)
		.sort((a, b) => a - b);
	if (arcs.length === 0) return null;
	const half = arcs.length >> 1;
	return arcs.length % 2 === 1 ? arcs[half]! : (arcs[half - 1]! + arcs[half]!) / 2;
}

/** Open or not, and why not, in a sentence. */
export function whyWords(site: Site, { sun }: SiteState, zone: ZoneState): string {
	const rule = `${formatShare(zone.share)} of the eyes see at least ${site.minimumArcDeg}°`;
	if (zone.open) return `Open: ${rule}.`;
	const altitude = `${sun.altitudeDeg.toFixed(1)}°`;
	if (!(sun.altitudeDeg > 0)) return `Not open: the sun is down, at ${altitude}.`;
	if (sun.altitudeDeg < site.minimumSunAltitudeDeg) {
		return `Not open: the sun is at ${altitude}, below the ${site.minimumSunAltitudeDeg}° of the rule.`;
	}
	if (!sunIsUp(site, sun)) {
		const edge = site.horizon.altitudeDegAt(sun.azimuthDeg).toFixed(1);
		return `Not open: the sun is at ${altitude}, behind the skyline, which reaches ${edge}° there.`;
	}
	return `Not open: ${rule}; ${formatShare(site.minimumShare)} are needed.`;
}

/** The day's band for one zone, with windows that begin on that day. */
export function bandOf(site: Site, day: TableDay, zoneIndex: number): DayBandData {
	const found = findWindows({ site, from: day.date, to: day.date })[zoneIndex];
	return {
		date: day.date,
		timeZone: site.clock.timeZone,
		startMs: day.startMs,
		endMs: day.endMs,
		daylight: daylight({ ...site, startMs: day.startMs, endMs: day.endMs }),
		windows: (found?.windows ?? []).map(({ startMs, endMs, peakArcDeg }) => ({
			startMs,
			endMs: Math.min(endMs, day.endMs),
			arcDeg: peakArcDeg
		})),
		slots: []
	};
}
