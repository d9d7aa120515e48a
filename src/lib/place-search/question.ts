import type { Season, SlotPattern } from '../schedule';
import type { Plan, PlanCurtain } from '../schemas/plan';
import { withPlaced } from './placed';

/** A place on the ground in the site frame: metres, [x east, y north]. */
export type Ground = readonly [number, number];

/** Where a curtain stands: its middle in metres, and its bearing, degrees clockwise from north. */
export interface Placement {
	readonly x: number;
	readonly y: number;
	/** 0 to below 180: a curtain looks the same from both ends. */
	readonly bearingDeg: number;
}

/** The curtain that a place is sought for. Metres; drops in micrometres. */
export interface SoughtCurtain {
	readonly lengthM: number;
	readonly bottomM: number;
	readonly topM: number;
	readonly dropDiameterUm: number;
}

/** What a search is asked. */
export interface PlaceQuestion {
	/** A right plan. Its walls, its skyline and its other enabled curtains count as they stand. */
	readonly plan: Plan;
	/** Place of the zone in the plan whose minutes are sought. */
	readonly zoneIndex: number;
	/** Place of the curtain in the plan that the sought one stands in for; null: it is one more. */
	readonly replaces: number | null;
	readonly curtain: SoughtCurtain;
	/** Corners of the free area: the whole curtain stands in it. */
	readonly area: readonly Ground[];
	readonly season: Season;
	/** How it is sold: opening hours with days off, and slots. */
	readonly pattern: SlotPattern;
	/** Places in a slot. */
	readonly capacity: number;
}

const RAD_PER_DEG = Math.PI / 180;

/** A bearing of a curtain, turned into 0 to below 180 degrees. */
export function halfTurn(bearingDeg: number): number {
	const turned = ((bearingDeg % 180) + 180) % 180;
	return turned === 180 ? 0 : turned;
}

/** Smallest angle between the bearings of two curtains, 0 to 90 degrees. */
export function bearingsApartDeg(a: number, b: number): number {
	const apart = halfTurn(a - b);
	return Math.min(apart, 180 - apart);
}

/** The lesser turn from one bearing of a curtain to another, above -90 to 90 degrees, clockwise positive. */
export function turnBetweenDeg(fromDeg: number, toDeg: number): number {
	const turn = halfTurn(toDeg - fromDeg);
	return turn > 90 ? turn - 180 : turn;
}

/** The ends of a curtain of a length at a placement. */
export function endsOf(
	{ x, y, bearingDeg }: Placement,
	lengthM: number
): { from: [number, number]; to: [number, number] } {
	const dx = (Math.sin(bearingDeg * RAD_PER_DEG) * lengthM) / 2;
	const dy = (Math.cos(bearingDeg * RAD_PER_DEG) * lengthM) / 2;
	return { from: [x - dx, y - dy], to: [x + dx, y + dy] };
}

/** Where a curtain of a plan stands. */
export function placementOf({ from, to }: Pick<PlanCurtain, 'from' | 'to'>): Placement {
	const bearing = Math.atan2(to[0] - from[0], to[1] - from[1]) / RAD_PER_DEG;
	return {
		x: (from[0] + to[0]) / 2,
		y: (from[1] + to[1]) / 2,
		bearingDeg: halfTurn(bearing)
	};
}

/** A placement moved along itself (the way that it bears) and to its right, metres, and turned. */
export function moved(
	placement: Placement,
	{ alongM = 0, acrossM = 0, turnDeg = 0 }: { alongM?: number; acrossM?: number; turnDeg?: number }
): Placement {
	const sin = Math.sin(placement.bearingDeg * RAD_PER_DEG);
	const cos = Math.cos(placement.bearingDeg * RAD_PER_DEG);
	return {
		x: placement.x + alongM * sin + acrossM * cos,
		y: placement.y + alongM * cos - acrossM * sin,
		bearingDeg: halfTurn(placement.bearingDeg + turnDeg)
	};
}

/** Placements are told to the centimetre and a tenth of a degree: nobody hangs a curtain closer. */
export function tidyPlacement({ x, y, bearingDeg }: Placement): Placement {
	const tidy = (value: number, parts: number) => Math.round(value * parts) / parts || 0;
	return { x: tidy(x, 100), y: tidy(y, 100), bearingDeg: tidy(bearingDeg, 10) % 180 };
}

const millimetre = (metres: number) => Math.round(metres * 1000) / 1000 || 0;

/** The curtain at a placement as the plan writes it, ends to the millimetre; it is switched on. */
export function curtainAt(
	{ plan, replaces, curtain }: Pick<PlaceQuestion, 'plan' | 'replaces' | 'curtain'>,
	placement: Placement
): PlanCurtain {
	const before = replaces === null ? undefined : plan.curtains[replaces];
	const { from, to } = endsOf(placement, curtain.lengthM);
	return {
		...before,
		from: [millimetre(from[0]), millimetre(from[1])],
		to: [millimetre(to[0]), millimetre(to[1])],
		bottom: curtain.bottomM,
		top: curtain.topM,
		dropDiameter: curtain.dropDiameterUm,
		enabled: true
	};
}

/** The whole plan with the curtain at a placement: instead of the one it replaces, or as the last one. */
export function planWith(
	question: Pick<PlaceQuestion, 'plan' | 'replaces' | 'curtain'>,
	placement: Placement
): Plan {
	const curtain = curtainAt(question, placement);
	return withPlaced(question.plan, { index: question.replaces, curtain }).plan;
}
