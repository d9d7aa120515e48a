import { formatCount, formatShare } from '../../format';
import { KEEPS, TRIED_DEG, TRIED_M, type Flatness } from '../flatness';
import { endsOf, type Placement } from '../question';
import type { SearchStage } from '../suggestion';

const stages: Record<SearchStage, string> = {
	field: 'places judged',
	closer: 'of the best judged closer',
	climb: 'of the best improved',
	hills: 'told apart',
	count: 'counted to the second',
	flatness: 'moved and turned a little'
};

/** How far a stage is: 1,200 of 2,400 places judged. */
export const stageWords = (stage: SearchStage, done: number, of: number): string =>
	`${done.toLocaleString('en-GB')} of ${of.toLocaleString('en-GB')} ${stages[stage]}`;

/** How much of a whole search lies before a stage, and how much it is itself, about. */
const shares: Record<SearchStage, readonly [number, number]> = {
	field: [0, 0.35],
	closer: [0.35, 0.08],
	climb: [0.43, 0.35],
	hills: [0.78, 0.04],
	count: [0.82, 0.1],
	flatness: [0.92, 0.08]
};

/** How far the whole search is, 0 to 1. */
export function partDone(stage: SearchStage, done: number, of: number): number {
	const [before, own] = shares[stage];
	return before + own * (of > 0 ? done / of : 0);
}

const metres = (value: number) => String(Math.round(value * 100) / 100);

/** Where a curtain stands, in words: middle and bearing. */
export const placeWords = ({ x, y, bearingDeg }: Placement): string =>
	`middle at ${metres(x)}; ${metres(y)} m, bearing ${Math.round(bearingDeg * 10) / 10}°`;

/** Its ends, in words. */
export function endWords(placement: Placement, lengthM: number): string {
	const { from, to } = endsOf(placement, lengthM);
	return `from ${from.map(metres).join('; ')} to ${to.map(metres).join('; ')} m`;
}

/** How flat it is, in a sentence on what it keeps. */
export function keptWords({ kept }: Flatness): string {
	return (
		`Moved by a metre it keeps ${formatShare(kept.along1M)} along itself and ` +
		`${formatShare(kept.across1M)} across; turned by 5° ${formatShare(kept.turned5Deg)}.`
	);
}

const leeway = (value: number, tried: readonly number[], unit: string): string => {
	if (value === 0) return `under ${tried[0]}${unit}`;
	return value === tried.at(-1) ? `${value}${unit} and more` : `${value}${unit}`;
};

/** Within what it keeps nearly all, by kind of move. */
export function leewayWords({ leeway: found }: Flatness): { move: string; within: string }[] {
	return [
		{ move: 'along itself', within: leeway(found.alongM, TRIED_M, ' m') },
		{ move: 'across itself', within: leeway(found.acrossM, TRIED_M, ' m') },
		{ move: 'turned', within: leeway(found.turnDeg, TRIED_DEG, '°') }
	];
}

export const keepsWords = `${formatShare(KEEPS)} or more is kept within`;

/** How many were judged. */
export const judgedWords = (judged: number): string => `${formatCount(judged, 'place')} judged`;
