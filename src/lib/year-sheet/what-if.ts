import { typedNumber } from '../schemas/plan-form';
import { readPlan, type Plan, type PlanCurtain } from '../schemas/plan';

/** What is typed to try a plan otherwise, as text: nothing typed is lost when it is wrong. */
export interface WhatIfFields {
	curtains: {
		enabled: boolean;
		/** Volume median, micrometres. */
		dropDiameterUm: string;
		/** From end to end, metres; the curtain keeps its middle. */
		lengthM: string;
		/** The whole curtain moved along itself, from its first end to its second, metres. */
		alongM: string;
		/** The whole curtain moved across itself, to the left of that direction, metres. */
		acrossM: string;
		topM: string;
	}[];
	minimumArcDeg: string;
	/** Per cent of the zone's eyes. */
	minimumSharePercent: string;
	minimumSunAltitudeDeg: string;
}

/** What is wrong, by the name of the field: `curtains[0].lengthM`, `minimumArcDeg`. */
export type WhatIfFaults = Record<string, string>;

const text = (value: number) => String(Math.round(value * 1e6) / 1e6);
const lengthOf = ({ from, to }: PlanCurtain) => Math.hypot(to[0] - from[0], to[1] - from[1]);

/** The fields of a plan as it stands. */
export function whatIfFields(plan: Plan): WhatIfFields {
	return {
		curtains: plan.curtains.map((curtain) => ({
			enabled: curtain.enabled ?? true,
			dropDiameterUm: text(curtain.dropDiameter),
			lengthM: text(lengthOf(curtain)),
			alongM: '0',
			acrossM: '0',
			topM: text(curtain.top)
		})),
		minimumArcDeg: text(plan.rule.minimumArc),
		minimumSharePercent: text(plan.rule.minimumShare * 100),
		minimumSunAltitudeDeg: text(plan.rule.minimumSunAltitude)
	};
}

/** Field of a what-if by the JSON path that the plan's own check names. */
const fieldOfPath: readonly (readonly [RegExp, string])[] = [
	[/^(curtains\[\d+\])\.dropDiameter$/, '$1.dropDiameterUm'],
	[/^(curtains\[\d+\])\.(?:top|bottom)$/, '$1.topM'],
	[/^(curtains\[\d+\])\.(?:from|to)\b.*$/, '$1.lengthM'],
	[/^rule\.minimumArc$/, 'minimumArcDeg'],
	[/^rule\.minimumShare$/, 'minimumSharePercent'],
	[/^rule\.minimumSunAltitude$/, 'minimumSunAltitudeDeg']
];

const fieldFor = (path: string): string => {
	const known = fieldOfPath.find(([pattern]) => pattern.test(path));
	return known ? path.replace(known[0], known[1]) : path;
};

/** A curtain with the changes; what was not changed keeps its exact numbers. */
function changedCurtain(
	curtain: PlanCurtain,
	to: {
		enabled: boolean;
		dropDiameterUm: number;
		lengthM: number;
		alongM: number;
		acrossM: number;
		topM: number;
	}
): PlanCurtain {
	const length = lengthOf(curtain);
	const alongX = (curtain.to[0] - curtain.from[0]) / length;
	const alongY = (curtain.to[1] - curtain.from[1]) / length;
	// The field shows six decimals: what was left as shown is not a change of length.
	const growM = text(to.lengthM) === text(length) ? 0 : to.lengthM - length;
	const moved = ([x, y]: [number, number], alongM: number): [number, number] => [
		x + alongX * alongM - alongY * to.acrossM,
		y + alongY * alongM + alongX * to.acrossM
	];
	return {
		...curtain,
		enabled: to.enabled,
		dropDiameter: to.dropDiameterUm,
		top: to.topM,
		from: moved(curtain.from, to.alongM - growM / 2),
		to: moved(curtain.to, to.alongM + growM / 2)
	};
}

/**
 * The plan with what was typed.
 * @returns the edited copy, or what is wrong at which field
 */
export function planWithWhatIf(
	plan: Plan,
	fields: WhatIfFields
): { plan: Plan } | { faults: WhatIfFaults } {
	const faults: WhatIfFaults = {};
	const number = (name: string, typed: string): number => {
		const value = typedNumber(typed);
		if (Number.isNaN(value)) faults[name] = 'Give a number.';
		return value;
	};
	const curtains = plan.curtains.map((curtain, i) => {
		const typed = fields.curtains[i];
		if (!typed) return curtain;
		const of = (name: 'dropDiameterUm' | 'lengthM' | 'alongM' | 'acrossM' | 'topM') =>
			number(`curtains[${i}].${name}`, typed[name]);
		const lengthM = of('lengthM');
		if (lengthM <= 0) faults[`curtains[${i}].lengthM`] = 'Must be above 0.';
		return changedCurtain(curtain, {
			enabled: typed.enabled,
			dropDiameterUm: of('dropDiameterUm'),
			lengthM,
			alongM: of('alongM'),
			acrossM: of('acrossM'),
			topM: of('topM')
		});
	});
	const percent = number('minimumSharePercent', fields.minimumSharePercent);
	const rule = {
		minimumArc: number('minimumArcDeg', fields.minimumArcDeg),
		minimumShare:
			fields.minimumSharePercent === text(plan.rule.minimumShare * 100)
				? plan.rule.minimumShare
				: percent / 100,
		minimumSunAltitude: number('minimumSunAltitudeDeg', fields.minimumSunAltitudeDeg)
	};
	if (Object.keys(faults).length > 0) return { faults };
	const read = readPlan({ ...plan, curtains, rule });
	if (read.ok) return { plan: read.plan };
	for (const { path, message } of read.faults) {
		const name = fieldFor(path);
		const said = name === 'minimumSharePercent' ? 'must be above 0 %, to 100 %' : message;
		faults[name] ??= `${said.charAt(0).toUpperCase()}${said.slice(1)}.`;
	}
	return { faults };
}
