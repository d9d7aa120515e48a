import { standsIn } from './area';
import {
	bearingsApartDeg,
	halfTurn,
	turnBetweenDeg,
	type Ground,
	type Placement
} from './question';

/** Two placements are different ones from here on: so far apart, or turned by so much, or some of each. */
export interface Niche {
	readonly metres: number;
	readonly degrees: number;
}

/** Places that are told apart: by half a curtain, two metres at least, or by 60 degrees of turn. */
export const nicheOf = (lengthM: number): Niche => ({
	metres: Math.max(2, lengthM / 2),
	degrees: 60
});

/** Places that are elsewhere, however they are turned: half as far apart again. */
export const elsewhereOf = (lengthM: number): Niche => ({
	metres: 1.5 * nicheOf(lengthM).metres,
	degrees: Infinity
});

/** How far two placements are apart; 1 is the edge of a niche. */
export function apart(a: Placement, b: Placement, { metres, degrees }: Niche): number {
	return Math.hypot(
		Math.hypot(a.x - b.x, a.y - b.y) / metres,
		bearingsApartDeg(a.bearingDeg, b.bearingDeg) / degrees
	);
}

/**
 * The best of each niche, best first: one after the other is taken, and what lies in the niche of one that
 * was taken is cleared away (Petrowski, "A clearing procedure as a niching method for genetic algorithms",
 * IEEE International Conference on Evolutionary Computation, 1996).
 * @param worth of each, more is better; of two that are worth the same the earlier is taken
 * @param most how many are wanted
 */
export function clearNiches<T extends { readonly placement: Placement }>(
	found: readonly T[],
	worth: (one: T) => number,
	niche: Niche,
	most: number
): T[] {
	const kept: T[] = [];
	for (const one of [...found].sort((a, b) => worth(b) - worth(a))) {
		if (kept.length >= most) break;
		if (kept.every(({ placement }) => apart(placement, one.placement, niche) >= 1)) kept.push(one);
	}
	return kept;
}

/** A valley between two summits is deeper than this part of the lower one: counting by parts is not finer. */
export const VALLEY = 0.97;

/** Looks between two summits. */
const BETWEEN = 5;

/**
 * Placements on the straight way from one to another, in place and bearing, without the ends; null when one
 * of them does not stand in the area: there is no way through.
 */
export function wayBetween(
	a: Placement,
	b: Placement,
	area: readonly Ground[],
	lengthM: number
): Placement[] | null {
	const turn = turnBetweenDeg(a.bearingDeg, b.bearingDeg);
	const way = Array.from({ length: BETWEEN }, (_, i) => {
		const part = (i + 1) / (BETWEEN + 1);
		return {
			x: a.x + part * (b.x - a.x),
			y: a.y + part * (b.y - a.y),
			bearingDeg: halfTurn(a.bearingDeg + part * turn)
		};
	});
	return way.every((placement) => standsIn(area, placement, lengthM)) ? way : null;
}

/**
 * Whether two summits are hills of their own: somewhere on the way between them it goes down (the hill-valley
 * rule of Ursem, "Multinational evolutionary algorithms", Congress on Evolutionary Computation, 1999).
 * @param between what the placements on the way are worth
 */
export function valleyBetween(a: number, b: number, between: readonly number[]): boolean {
	return Math.min(...between) < VALLEY * Math.min(a, b);
}
