import { moved, type Placement } from './question';

/** What part of its minutes a placement keeps, 0 and up: 1 is all. */
export interface Kept {
	/** Moved by a metre along itself, across itself, turned by five degrees: the worse of both ways. */
	readonly along1M: number;
	readonly across1M: number;
	readonly turned5Deg: number;
}

/** How far a placement may be moved or turned, either way, and still keep 95 per cent. */
export interface Leeway {
	readonly alongM: number;
	readonly acrossM: number;
	readonly turnDeg: number;
}

/** How flat the optimum is. */
export interface Flatness {
	readonly kept: Kept;
	readonly leeway: Leeway;
}

/** What a placement must keep to count as good still. */
export const KEEPS = 0.95;

/** Distances and turns that are tried, ascending; the last ones stand for "that far or farther". */
export const TRIED_M = [0.1, 0.2, 0.3, 0.5, 0.75, 1, 1.5, 2, 3, 5] as const;
export const TRIED_DEG = [1, 2, 3, 5, 7, 10, 15, 20, 30] as const;

/**
 * How flat the minutes are about a placement: whether a curtain that is hung a little otherwise still does.
 * The area is not looked at: what stands in the way of hanging it there is another question.
 * @param judge minutes of a placement
 */
export function flatnessOf(
	placement: Placement,
	judge: (placement: Placement) => number
): Flatness {
	const whole = judge(placement);
	const known = new Map<string, number>();
	/** The part that is kept after a step, the worse of both ways. */
	const kept = (way: 'alongM' | 'acrossM' | 'turnDeg', by: number): number => {
		const key = `${way} ${by}`;
		const before = known.get(key);
		if (before !== undefined) return before;
		const both = [by, -by].map((step) => judge(moved(placement, { [way]: step })));
		const part = whole > 0 ? Math.min(...both) / whole : 0;
		known.set(key, part);
		return part;
	};
	const farthest = (way: 'alongM' | 'acrossM' | 'turnDeg', tried: readonly number[]): number => {
		let good = 0;
		for (const by of tried) {
			if (kept(way, by) < KEEPS) break;
			good = by;
		}
		return good;
	};
	return {
		leeway: {
			alongM: farthest('alongM', TRIED_M),
			acrossM: farthest('acrossM', TRIED_M),
			turnDeg: farthest('turnDeg', TRIED_DEG)
		},
		kept: {
			along1M: kept('alongM', 1),
			across1M: kept('acrossM', 1),
			turned5Deg: kept('turnDeg', 5)
		}
	};
}
