import type { Plan, PlanCurtain, PlanWall, PlanZone } from '../schemas/plan';
import {
	bearingDeg,
	distanceM,
	movedEnds,
	movedOutline,
	resizedOutline,
	tidyPlace,
	turnedOutline,
	withBearing,
	withLength,
	type Place
} from './geometry';
import { boundingBox } from '../optics/polygon';

export type PartKind = 'curtains' | 'walls' | 'zones';

/** A part of the plan by its place in it. */
export interface PartRef {
	kind: PartKind;
	index: number;
}

export const kindWords: Record<PartKind, string> = {
	curtains: 'Curtain',
	walls: 'Wall',
	zones: 'Zone'
};

/** JSON path of a part, which also names its fields: `curtains[0]`. */
export const pathOf = ({ kind, index }: PartRef): string => `${kind}[${index}]`;

export const samePart = (a: PartRef | null, b: PartRef | null): boolean =>
	a?.kind === b?.kind && a?.index === b?.index;

/** A curtain or wall; null when there is none, or the part is a zone. */
export function sheetAt(plan: Plan, { kind, index }: PartRef): PlanCurtain | PlanWall | null {
	if (kind === 'zones') return null;
	return (kind === 'curtains' ? plan.curtains[index] : plan.walls?.[index]) ?? null;
}

export const zoneAt = (plan: Plan, { kind, index }: PartRef): PlanZone | null =>
	kind === 'zones' ? (plan.zones[index] ?? null) : null;

/** All parts, zones first as they lie undermost. */
export const partsOf = (plan: Plan): PartRef[] => [
	...plan.zones.map((_, index) => ({ kind: 'zones' as const, index })),
	...(plan.walls ?? []).map((_, index) => ({ kind: 'walls' as const, index })),
	...plan.curtains.map((_, index) => ({ kind: 'curtains' as const, index }))
];

/** What a part is called: its name, or its kind and place. */
export function nameOf(plan: Plan, ref: PartRef): string {
	const name = (sheetAt(plan, ref) ?? zoneAt(plan, ref))?.name;
	return name?.trim() ? name : `${kindWords[ref.kind]} ${ref.index + 1}`;
}

/** The plan with one part changed; what the change does not name stays. */
export function withPart(
	plan: Plan,
	{ kind, index }: PartRef,
	change: Partial<PlanCurtain> | Partial<PlanZone>
): Plan {
	const list = plan[kind] ?? [];
	if (!list[index]) return plan;
	const next = list.map((part, i) => (i === index ? { ...part, ...change } : part));
	return { ...plan, [kind]: next };
}

export const withoutPart = (plan: Plan, { kind, index }: PartRef): Plan => ({
	...plan,
	[kind]: (plan[kind] ?? []).filter((_, i) => i !== index)
});

/** The plan with a new part between two places (of a zone: opposite corners), and which it is. */
export function withNewPart(
	plan: Plan,
	kind: PartKind,
	from: Place,
	to: Place
): { plan: Plan; ref: PartRef } {
	const list = plan[kind] ?? [];
	const ends = { from: tidyPlace(from), to: tidyPlace(to) };
	// A new part takes its heights and drops from the last of its kind: terraces repeat themselves.
	const curtain = plan.curtains.at(-1);
	const wall = plan.walls?.at(-1);
	const zone = plan.zones.at(-1);
	const [[west, south], [east, north]] = [
		tidyPlace([Math.min(from[0], to[0]), Math.min(from[1], to[1])]),
		tidyPlace([Math.max(from[0], to[0]), Math.max(from[1], to[1])])
	];
	const made = {
		curtains: {
			...ends,
			bottom: curtain?.bottom ?? 0.3,
			top: curtain?.top ?? 6,
			dropDiameter: curtain?.dropDiameter ?? 400
		},
		walls: { ...ends, bottom: wall?.bottom ?? 0, top: wall?.top ?? 3 },
		zones: {
			outline: [
				[west, south],
				[east, south],
				[east, north],
				[west, north]
			],
			floor: zone?.floor ?? 0,
			eyeHeights: zone?.eyeHeights ?? [1.15, 1.65]
		}
	}[kind];
	return { plan: { ...plan, [kind]: [...list, made] }, ref: { kind, index: list.length } };
}

export function movedPart(plan: Plan, ref: PartRef, by: Place): Plan {
	const sheet = sheetAt(plan, ref);
	if (sheet) return withPart(plan, ref, movedEnds(sheet, by));
	const zone = zoneAt(plan, ref);
	return zone ? withPart(plan, ref, { outline: movedOutline(zone.outline, by) }) : plan;
}

export function turnedPart(plan: Plan, ref: PartRef, clockwiseDeg: number): Plan {
	const sheet = sheetAt(plan, ref);
	if (sheet) {
		const bearing = bearingDeg(sheet.from, sheet.to) + clockwiseDeg;
		return withPart(plan, ref, withBearing(sheet, bearing));
	}
	const zone = zoneAt(plan, ref);
	return zone ? withPart(plan, ref, { outline: turnedOutline(zone.outline, clockwiseDeg) }) : plan;
}

/** Longer by so many metres (a zone: wider and deeper). Nothing gets shorter than 0.1 m. */
export function resizedPart(plan: Plan, ref: PartRef, [dx, dy]: Place): Plan {
	const least = 0.1;
	const sheet = sheetAt(plan, ref);
	if (sheet) {
		const length = distanceM(sheet.from, sheet.to) + dx + dy;
		return withPart(plan, ref, withLength(sheet, Math.max(least, length)));
	}
	const zone = zoneAt(plan, ref);
	if (!zone) return plan;
	const { west, east, south, north } = boundingBox(zone.outline);
	const width = Math.max(least, east - west + dx);
	const depth = Math.max(least, north - south + dy);
	return withPart(plan, ref, { outline: resizedOutline(zone.outline, width, depth) });
}

/** Bearings of everything else that a part could stand square to, and north. */
export function bearingsBeside(plan: Plan, ref: PartRef | null): number[] {
	const bearings = [0];
	for (const other of partsOf(plan)) {
		if (samePart(other, ref)) continue;
		const sheet = sheetAt(plan, other);
		if (sheet) bearings.push(bearingDeg(sheet.from, sheet.to));
		const outline = zoneAt(plan, other)?.outline ?? [];
		if (outline.length > 1) bearings.push(bearingDeg(outline[0]!, outline[1]!));
	}
	return [...new Set(bearings.flatMap((b) => [b, b + 90, b + 180, b + 270].map((d) => d % 360)))];
}

/** Length and bearing of a sheet, or width and depth of a zone, in words. */
export function measureWords(plan: Plan, ref: PartRef): string {
	const sheet = sheetAt(plan, ref);
	if (sheet) {
		const length = distanceM(sheet.from, sheet.to).toFixed(2);
		return `${length} m · ${bearingDeg(sheet.from, sheet.to).toFixed(1)}°`;
	}
	const zone = zoneAt(plan, ref);
	if (!zone) return '';
	const { west, east, south, north } = boundingBox(zone.outline);
	return `${(east - west).toFixed(2)} m × ${(north - south).toFixed(2)} m`;
}
