import { createSite, stateUnderSun, sunIsUp, sunPosition, type Site } from './optics';
import { crossingsAt, polygonArea } from './optics/polygon';
import type { Plan, PlanZone } from './schemas/plan';

/** Something in a right plan that is hardly meant. It stops nothing. */
export interface PlanCaution {
	/** JSON paths of the parts that it is about, the first foremost. */
	paths: readonly string[];
	message: string;
}

type Place = readonly [number, number];

/** An installation is under a kilometre across: further out the flat ground is none. */
const FAR_M = 1000;
const SHORT_M = 0.5;
const SMALL_M2 = 1;
/** Days between the solstices, about a month apart: the sun goes the same ways back. */
const lookDays = ['01-20', '02-18', '03-20', '04-20', '05-21', '06-21', '12-21'];
const LOOK_EVERY_MS = 15 * 60_000;
const DAY_MS = 86_400_000;

const side = (a: Place, b: Place, p: Place) =>
	(b[0] - a[0]) * (p[1] - a[1]) - (b[1] - a[1]) * (p[0] - a[0]);

function segmentsCross(a: Place, b: Place, c: Place, d: Place): boolean {
	return side(a, b, c) * side(a, b, d) < 0 && side(c, d, a) * side(c, d, b) < 0;
}

function isInside(outline: readonly Place[], [x, y]: Place): boolean {
	return crossingsAt(outline, y).filter((crossing) => crossing > x).length % 2 === 1;
}

/** Whether a sheet stands in a zone or goes through it, seen from above. */
function goesThrough(outline: readonly Place[], from: Place, to: Place): boolean {
	return (
		isInside(outline, from) ||
		isInside(outline, to) ||
		outline.some((corner, i) => segmentsCross(from, to, corner, outline[(i + 1) % outline.length]!))
	);
}

const headM = (zone: PlanZone) => zone.floor + Math.max(...zone.eyeHeights);

/** Zones from which no bow was found in a look through a year, by their place. */
function zonesWithoutBow(site: Site, year: number): Set<number> {
	const dark = new Set(site.zones.keys());
	for (const day of lookDays) {
		const startMs = Date.parse(`${year}-${day}T00:00:00Z`);
		for (let at = startMs; at < startMs + DAY_MS; at += LOOK_EVERY_MS) {
			if (dark.size === 0) return dark;
			const sun = sunPosition({ instantMs: at, ...site });
			if (!sunIsUp(site, sun)) continue;
			const { zones } = stateUnderSun(site, sun);
			for (const i of dark) if (zones[i]!.open) dark.delete(i);
		}
	}
	return dark;
}

/**
 * What a planner would want to look at again in a plan: sizes that are hardly in metres, mist that hangs
 * through people, zones from which no bow was found. The look through the year takes some tens of
 * milliseconds.
 * @param year of the look
 */
export function planCautions(plan: Plan, year: number): PlanCaution[] {
	const cautions: PlanCaution[] = [];
	const tell = (path: string, message: string, ...others: string[]) =>
		cautions.push({ paths: [path, ...others], message });
	const zoneName = (i: number) => plan.zones[i]!.name ?? `Zone ${i + 1}`;
	const sheets = [
		...plan.curtains.map((one, i) => ({ one, path: `curtains[${i}]`, kind: 'Curtain', i })),
		...(plan.walls ?? []).map((one, i) => ({ one, path: `walls[${i}]`, kind: 'Wall', i }))
	].map((part) => ({ ...part, name: part.one.name ?? `${part.kind} ${part.i + 1}` }));
	for (const { one, path, name, kind } of sheets) {
		const far = Math.max(...[one.from, one.to].map(([x, y]) => Math.hypot(x, y)));
		const lengthM = Math.hypot(one.to[0] - one.from[0], one.to[1] - one.from[1]);
		if (far > FAR_M) {
			tell(path, `${name} stands ${Math.round(far)} m from the datum. Are these metres?`);
		} else if (kind === 'Curtain' && lengthM < SHORT_M) {
			tell(path, `${name} is ${Math.round(lengthM * 100) / 100} m long. Are these metres?`);
		}
	}
	for (const [i, zone] of plan.zones.entries()) {
		const path = `zones[${i}]`;
		const far = Math.max(...zone.outline.map(([x, y]) => Math.hypot(x, y)));
		const areaM2 = polygonArea(zone.outline);
		if (far > FAR_M) {
			tell(path, `${zoneName(i)} reaches ${Math.round(far)} m from the datum. Are these metres?`);
		} else if (areaM2 < SMALL_M2) {
			const cm2 = Math.round(areaM2 * 10_000);
			tell(path, `${zoneName(i)} has ${cm2} cm² to stand on. Are these metres?`);
		}
		for (const { one, path: sheetPath, name, kind } of sheets) {
			if (kind !== 'Curtain' || one.bottom >= headM(zone)) continue;
			if (goesThrough(zone.outline, one.from, one.to)) {
				tell(
					path,
					`${name} hangs through ${zoneName(i)}: people would stand in the mist.`,
					sheetPath
				);
			}
		}
	}
	if (plan.curtains.some((curtain) => curtain.enabled ?? true) && plan.zones.length > 0) {
		for (const i of zonesWithoutBow(createSite(plan), year)) {
			tell(
				`zones[${i}]`,
				`No bow was found from ${zoneName(i)} in a look through ${year} every quarter of an hour. A zone needs the sun behind it and a curtain before it.`
			);
		}
	}
	return cautions;
}
