import type { PlaceTotals } from './count';
import type { Flatness } from './flatness';
import type { Placement } from './question';

/** One of the best places, as far as it is known. */
export interface Suggestion {
	readonly placement: Placement;
	/** Sellable minutes in the season, by parts of the sky. */
	readonly minutes: number;
	/** Nothing near it is better. False: the best of what lies elsewhere. */
	readonly summit: boolean;
	/** Counted by the engine to the second; null while it is not. */
	readonly totals: PlaceTotals | null;
	readonly flatness: Flatness | null;
}

/**
 * What a search is at: the field is judged; the best of it judged closer; climbed from; hills told apart;
 * the best counted to the second, and moved about.
 */
export type SearchStage = 'field' | 'closer' | 'climb' | 'hills' | 'count' | 'flatness';

/** How far a search is. */
export interface SearchProgress {
	readonly stage: SearchStage;
	/** Of this stage. */
	readonly done: number;
	readonly of: number;
	/** Placements judged so far in all stages. */
	readonly judged: number;
	/** The best so far, from different places, best first. */
	readonly best: readonly Suggestion[];
}

/** What a search came to. */
export interface SearchResult {
	readonly suggestions: readonly Suggestion[];
	/** The plan as it stands; null when it was stopped before. */
	readonly present: PlaceTotals | null;
	/** Minutes inside opening hours with the sun high enough and above the skyline; null as above. */
	readonly sunMinutes: number | null;
	readonly judged: number;
	readonly stopped: boolean;
}

/** How much is searched. */
export interface SearchEffort {
	/** How many of the field are judged closer, and how many of those are climbed from. */
	readonly closer: number;
	readonly climbs: number;
	/** How many are counted to the second, and how many of those are shown. */
	readonly counted: number;
	readonly shown: number;
	/** So many places are shown at least, if there are such that are not on a hill of their own. */
	readonly filled: number;
}

export const usualEffort: SearchEffort = {
	closer: 96,
	climbs: 12,
	counted: 8,
	shown: 5,
	filled: 3
};

/** A placement that was judged. */
export const judgedAs = (placement: Placement, minutes: number, summit: boolean): Suggestion => ({
	placement,
	minutes,
	summit,
	totals: null,
	flatness: null
});

/** Its minutes: the engine's count where there is one. */
export const worth = ({ totals, minutes }: Suggestion) => totals?.openMinutes ?? minutes;
/** Best first. */
export const byWorth = (a: Suggestion, b: Suggestion) => worth(b) - worth(a);
