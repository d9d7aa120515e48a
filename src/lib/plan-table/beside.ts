import type { DayBandData } from '../day-band';
import type { LocalDate } from '../schedule';
import type { PlanCaution } from '../plan-cautions';
import type { Plan } from '../schemas/plan';

/** What is worked out beside the plan table, so that no frame waits for it. Plans are right ones. */
export type BesideQuestion =
	| {
			readonly kind: 'band';
			readonly plan: Plan;
			readonly date: LocalDate;
			readonly zoneIndex: number;
	  }
	| { readonly kind: 'cautions'; readonly plan: Plan; readonly year: number };

export type BesideAnswer =
	| { readonly kind: 'band'; readonly band: DayBandData }
	| { readonly kind: 'cautions'; readonly cautions: PlanCaution[] };
