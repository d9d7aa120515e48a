import type { Plan, PlanCurtain } from '../schemas/plan';

/** A curtain on its way from a search to the plan that it was sought for. */
export interface PlacedCurtain {
	/** Its place in the plan; null: it is a new one. */
	readonly index: number | null;
	readonly curtain: PlanCurtain;
	/** The count of saves of the plan as it was searched: another plan is not touched. */
	readonly revision: number;
}

/** The plan with the curtain where it was placed, and its place in the plan. */
export function withPlaced(
	plan: Plan,
	{ index, curtain }: Pick<PlacedCurtain, 'index' | 'curtain'>
): { plan: Plan; index: number } {
	if (index === null || index >= plan.curtains.length) {
		return {
			plan: { ...plan, curtains: [...plan.curtains, curtain] },
			index: plan.curtains.length
		};
	}
	const curtains = plan.curtains.map((one, i) => (i === index ? curtain : one));
	return { plan: { ...plan, curtains }, index };
}
