import { describe, expect, it } from 'vitest';
import { planWithWhatIf, whatIfFields } from '../../../src/lib/year-sheet/what-if';
import { readPlan } from '../../../src/lib/schemas/plan';
import quarry from '../../fixtures/quarry-terrace.json';

const read = readPlan(quarry);
if (!read.ok) throw new Error('the fixture is no plan');
const plan = read.plan;

describe('a what-if', () => {
	it('that changes nothing is the plan', () => {
		expect(planWithWhatIf(plan, whatIfFields(plan))).toEqual({ plan });
	});

	it('changes drops, length about the middle, place along and across, and the rule', () => {
		const fields = whatIfFields(plan);
		// The west curtain runs north from (-14, -6) to (-14, 10): along is north, left of it is west.
		Object.assign(fields.curtains[0]!, {
			dropDiameterUm: '600',
			lengthM: '20',
			alongM: '1,5',
			acrossM: '-2'
		});
		fields.curtains[1]!.enabled = false;
		fields.minimumArcDeg = '60';
		fields.minimumSharePercent = '80';
		fields.minimumSunAltitudeDeg = '5';
		const edited = planWithWhatIf(plan, fields);
		if ('faults' in edited) throw new Error(JSON.stringify(edited.faults));
		expect(edited.plan.curtains[0]).toMatchObject({
			dropDiameter: 600,
			from: [-12, -6.5],
			to: [-12, 13.5]
		});
		expect(edited.plan.curtains[1]?.enabled).toBe(false);
		expect(edited.plan.rule).toEqual({
			minimumArc: 60,
			minimumShare: 0.8,
			minimumSunAltitude: 5
		});
		expect(plan.curtains[0]?.dropDiameter).toBe(420);
	});

	it('says what is wrong at its field', () => {
		const fields = whatIfFields(plan);
		fields.curtains[0]!.dropDiameterUm = '1';
		fields.curtains[1]!.topM = '0';
		fields.minimumSharePercent = '120';
		expect(planWithWhatIf(plan, fields)).toEqual({
			faults: {
				'curtains[0].dropDiameterUm': expect.stringMatching(/^Must be from 5 to/) as string,
				'curtains[1].topM': 'Must be above bottom.',
				minimumSharePercent: 'Must be above 0 %, to 100 %.'
			}
		});
		fields.curtains[0]!.lengthM = 'long';
		fields.curtains[1]!.lengthM = '0';
		expect(planWithWhatIf(plan, fields)).toEqual({
			faults: {
				'curtains[0].lengthM': 'Give a number.',
				'curtains[1].lengthM': 'Must be above 0.'
			}
		});
	});
});
