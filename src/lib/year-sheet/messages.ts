import type { BowWindow } from '../optics';
import type { Interval } from '../schedule';
import type { Plan } from '../schemas/plan';
import type { Shade } from './year-pieces';

/** What a page asks the year's worker for. A new start ends the run before it. */
export type YearRequest =
	| {
			readonly kind: 'start';
			/** Names the run in its answers. */
			readonly run: number;
			readonly plan: Plan;
			/** Place of the zone in the plan. */
			readonly zoneIndex: number;
			readonly year: number;
	  }
	| { readonly kind: 'stop' };

/** What the worker answers. */
export type YearAnswer =
	| {
			readonly kind: 'piece';
			readonly run: number;
			readonly windows: readonly BowWindow[];
			readonly daylight: readonly Interval[];
			readonly daysDone: number;
			readonly daysInAll: number;
			/** Milliseconds since the worker had the plan. */
			readonly afterMs: number;
	  }
	| {
			/** After the last piece: the shades of the next windows in their order. */
			readonly kind: 'shades';
			readonly run: number;
			readonly shades: readonly (readonly Shade[])[];
	  }
	| { readonly kind: 'fault'; readonly run: number; readonly message: string };
