import { formatNumber } from '../format';
import type { Plan, PlanCurtain } from '../schemas/plan';

const isOn = (curtain: PlanCurtain) => curtain.enabled ?? true;

/**
 * Water that the switched-on curtains take together, litres a minute.
 * @returns null when the flow of none of them is known
 */
export function flowLPerMin(plan: Plan): number | null {
	const known = plan.curtains.filter(isOn).flatMap(({ waterFlow }) => waterFlow ?? []);
	return known.length === 0 ? null : known.reduce((sum, flow) => sum + flow, 0);
}

/** What minutes of mist take, cubic metres. */
export const waterM3 = (lPerMin: number, minutes: number): number => (lPerMin * minutes) / 1000;

/** The plan's flow in words, telling when it is not the whole; empty when none is known. */
export function flowWords(plan: Plan): string {
	const flow = flowLPerMin(plan);
	if (flow === null) return '';
	const unknown = plan.curtains.filter((one) => isOn(one) && one.waterFlow === undefined).length;
	const rest = unknown > 0 ? `; the flow of ${unknown} more is not known` : '';
	return `Curtains switched on take ${formatNumber(flow, 1)} litres a minute, ${formatNumber(waterM3(flow, 60), 2)} m³ an hour${rest}.`;
}
