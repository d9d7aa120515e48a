import type { PlaceQuestion } from '../question';
import type { PlaceJob, PlaceResults } from '../work';

/** What a page asks a worker: its question first, then one job after the other. */
export type PlaceRequest =
	| { readonly kind: 'question'; readonly question: PlaceQuestion }
	| { readonly kind: 'job'; readonly job: PlaceJob };

/** What the worker answers to a job. */
export type PlaceAnswer =
	| { readonly kind: 'result'; readonly result: PlaceResults[keyof PlaceResults] }
	| { readonly kind: 'fault'; readonly message: string };
