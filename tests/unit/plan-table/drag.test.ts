import { describe, expect, test } from 'vitest';
import { arrowPlan, draggedPlan } from '../../../src/lib/plan-table/drag';
import { bearingDeg, distanceM } from '../../../src/lib/plan-table/geometry';
import { barePlan, quarryTerrace } from '../../support/plans';

const metre = { stepM: 1, rightAngles: true };
const plan = barePlan({
	curtains: [{ from: [-4, 8], to: [4, 8], bottom: 0, top: 5, dropDiameter: 400 }],
	walls: [],
	zones: [
		{
			outline: [
				[0, 0],
				[4, 0],
				[4, 4],
				[0, 4]
			],
			floor: 0,
			eyeHeights: [1.6]
		}
	]
});
const curtain = { kind: 'curtains', index: 0 } as const;
const zone = { kind: 'zones', index: 0 } as const;

describe('what a drag does', () => {
	test('a part moves by whole metres and keeps its shape', () => {
		const drag = { act: 'move', ref: curtain, start: [0, 8] } as const;
		const moved = draggedPlan(plan, { ...drag, start: [0, 8] }, [2.3, 6.4], metre).curtains[0]!;
		expect([moved.from, moved.to]).toEqual([
			[-2, 6],
			[6, 6]
		]);
	});

	test('an end keeps the bearing when near to it', () => {
		const pulled = draggedPlan(plan, { act: 'end', ref: curtain, end: 'to' }, [9.2, 8.3], metre);
		expect(pulled.curtains[0]!.to).toEqual([9, 8]);
	});

	test('turning goes to right angles', () => {
		const drag = { act: 'turn' as const, ref: curtain, start: [0, 10] as [number, number] };
		const { from, to } = draggedPlan(plan, drag, [5, 8.1], metre).curtains[0]!;
		expect(bearingDeg(from, to)).toBeCloseTo(180);
		expect(distanceM(from, to)).toBeCloseTo(8);
	});

	test('a corner goes to where both its sides stand square', () => {
		const drag = { act: 'corner', ref: zone, corner: 2 } as const;
		const outline = draggedPlan(plan, drag, [6.1, 4.2], metre).zones[0]!.outline;
		expect(outline[2]).toEqual([6, 4]);
	});

	test('drawing makes a part; a zone is drawn between opposite corners', () => {
		const start: [number, number] = [1.2, 9.1];
		const drawn = draggedPlan(plan, { act: 'draw', kind: 'zones', start }, [5.9, 6.2], metre);
		expect(drawn.zones[1]!.outline).toEqual([
			[1, 6],
			[6, 6],
			[6, 9],
			[1, 9]
		]);
		const wall = draggedPlan(plan, { act: 'draw', kind: 'walls', start }, [1.4, 3.1], metre);
		expect(wall.walls![0]).toMatchObject({ from: [1, 9], to: [1, 3] });
	});

	test('a zone is sized from its south-west corner', () => {
		const sized = draggedPlan(plan, { act: 'size', ref: zone }, [6.4, 2.6], metre);
		expect(sized.zones[0]!.outline[2]).toEqual([6, 3]);
	});
});

describe('what arrow keys do', () => {
	const key = (name: string, held: { shiftKey?: boolean; altKey?: boolean } = {}) => ({
		key: name,
		shiftKey: false,
		altKey: false,
		...held
	});

	test('they move by the step', () => {
		expect(arrowPlan(plan, curtain, key('ArrowUp'), metre)!.curtains[0]!.from).toEqual([-4, 9]);
		expect(arrowPlan(plan, curtain, key('Enter'), metre)).toBeNull();
	});

	test('with Shift they turn, with Alt they lengthen', () => {
		const turned = arrowPlan(plan, curtain, key('ArrowRight', { shiftKey: true }), metre)!;
		expect(bearingDeg(turned.curtains[0]!.from, turned.curtains[0]!.to)).toBeCloseTo(95, 1);
		const longer = arrowPlan(plan, curtain, key('ArrowRight', { altKey: true }), metre)!;
		expect(longer.curtains[0]!.to).toEqual([5, 8]);
		const deeper = arrowPlan(plan, zone, key('ArrowUp', { altKey: true }), metre)!;
		expect(deeper.zones[0]!.outline[2]).toEqual([4, 5]);
	});

	test('there and back again is where it was', () => {
		const terrace = quarryTerrace();
		const there = arrowPlan(terrace, zone, key('ArrowLeft'), metre)!;
		expect(arrowPlan(there, zone, key('ArrowRight'), metre)!.zones).toEqual(terrace.zones);
	});
});
