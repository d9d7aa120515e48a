import { distanceToOutline } from '../optics/polygon';
import { standsIn } from './area';
import { endsOf, moved, turnBetweenDeg, type Ground, type Placement } from './question';

/** How far a climb steps at first; it ends after steps of the last size. */
export interface ClimbSteps {
	readonly firstM: number;
	readonly firstDeg: number;
	readonly lastM: number;
}

/** What a climb found. */
export interface Climbed {
	readonly placement: Placement;
	readonly minutes: number;
	/** Placements that were judged. */
	readonly judged: number;
}

/** A placement swung about a point, as a door about its hinge: it keeps showing the point the same face. */
function swung(placement: Placement, [x, y]: Ground, clockwiseDeg: number): Placement {
	const rad = (clockwiseDeg * Math.PI) / 180;
	const [dx, dy] = [placement.x - x, placement.y - y];
	const at = {
		...placement,
		x: x + dx * Math.cos(rad) + dy * Math.sin(rad),
		y: y - dx * Math.sin(rad) + dy * Math.cos(rad)
	};
	return moved(at, { turnDeg: clockwiseDeg });
}

type Step = (at: Placement, sign: 1 | -1) => Placement;

/** Steps of one size: along, across and about itself, and about where the visitors stand. */
function freeSteps(at: Placement, middle: Ground, metres: number, degrees: number): Step[] {
	const far = Math.hypot(at.x - middle[0], at.y - middle[1]);
	// About the visitors a step is as long on the ground as the others are.
	const swingDeg = Math.min(degrees, ((metres / Math.max(far, 1)) * 180) / Math.PI);
	return [
		(from, sign) => moved(from, { alongM: sign * metres }),
		(from, sign) => moved(from, { acrossM: sign * metres }),
		(from, sign) => moved(from, { turnDeg: sign * degrees }),
		(from, sign) => swung(from, middle, sign * swingDeg)
	];
}

/**
 * More steps for a curtain that has the edge of the area within a step of it: along the edges that its ends
 * are near to, about its ends, and about the corners that it leans against. There the free ones alone lead
 * nowhere: each of them would leave the area.
 */
function edgeSteps(
	at: Placement,
	area: readonly Ground[],
	lengthM: number,
	metres: number,
	degrees: number
): Step[] {
	const { from, to } = endsOf(at, lengthM);
	const ends: readonly Ground[] = [from, to];
	const along = area.flatMap((a, i): Step[] => {
		const b = area[(i + 1) % area.length]!;
		if (!ends.some((end) => distanceToOutline([a, b], end) <= metres)) return [];
		const edgeM = Math.hypot(b[0] - a[0], b[1] - a[1]) || 1;
		const [dx, dy] = [((b[0] - a[0]) / edgeM) * metres, ((b[1] - a[1]) / edgeM) * metres];
		return [(one, sign) => ({ ...one, x: one.x + sign * dx, y: one.y + sign * dy })];
	});
	const leaning = area.filter((corner) => distanceToOutline(ends, corner) <= metres);
	const hinges = along.length > 0 ? [...ends, ...leaning] : leaning;
	return [
		...along,
		...hinges.map(
			(hinge): Step =>
				(one, sign) =>
					swung(one, hinge, sign * degrees)
		)
	];
}

/**
 * Climbs from a placement to the best near it by pattern search (Hooke and Jeeves, "'Direct search' solution
 * of numerical and statistical problems", Journal of the ACM 8, 1961): each direction is tried both ways and
 * kept where it is better; what a round of them won is tried once more as a whole; a round that won nothing
 * halves the steps. What does not stand in the area is not judged.
 * @param judge minutes of a placement
 * @param middle where the visitors stand
 */
export function climb({
	from,
	minutes,
	area,
	lengthM,
	middle,
	steps,
	judge
}: {
	from: Placement;
	/** Of the placement that it begins at. */
	minutes?: number;
	area: readonly Ground[];
	lengthM: number;
	middle: Ground;
	steps: ClimbSteps;
	judge: (placement: Placement) => number;
}): Climbed {
	let judged = 0;
	const worth = (placement: Placement): number => {
		if (!standsIn(area, placement, lengthM)) return -1;
		judged++;
		return judge(placement);
	};
	let best = { placement: from, minutes: minutes ?? worth(from) };
	const explore = (base: typeof best, metres: number, degrees: number) => {
		let now = base;
		const directions = [
			...freeSteps(base.placement, middle, metres, degrees),
			...edgeSteps(base.placement, area, lengthM, metres, degrees)
		];
		for (const step of directions) {
			for (const sign of [1, -1] as const) {
				const placement = step(now.placement, sign);
				const value = worth(placement);
				if (value > now.minutes) {
					now = { placement, minutes: value };
					break;
				}
			}
		}
		return now;
	};
	let { firstM: metres, firstDeg: degrees } = steps;
	while (metres >= steps.lastM) {
		const next = explore(best, metres, degrees);
		if (next.minutes > best.minutes) {
			const before = best.placement;
			best = next;
			const again = {
				x: 2 * next.placement.x - before.x,
				y: 2 * next.placement.y - before.y,
				bearingDeg: moved(next.placement, {
					turnDeg: turnBetweenDeg(before.bearingDeg, next.placement.bearingDeg)
				}).bearingDeg
			};
			const value = worth(again);
			if (value > best.minutes) best = { placement: again, minutes: value };
			continue;
		}
		metres /= 2;
		degrees /= 2;
	}
	return { ...best, judged };
}
