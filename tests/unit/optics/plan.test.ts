import { describe, expect, it } from 'vitest';
import { createSite } from '../../../src/lib/optics';
import { latticePlaces } from '../../../src/lib/optics/lattice';
import { crossesItself, polygonArea, type Corner } from '../../../src/lib/optics/polygon';
import { readPlan, type Plan } from '../../../src/lib/schemas/plan';
import { fourByFour, quarryTerrace } from '../../support/plans';

/** The paths at fault after one change to a plan that is right. */
function faults(change: (plan: Plan & Record<string, unknown>) => void): string[] {
	const plan = quarryTerrace() as Plan & Record<string, unknown>;
	change(plan);
	const read = readPlan(plan);
	return read.ok ? [] : read.faults.map(({ path }) => path);
}

const bad = (value: unknown) => value as never;

describe('plan schema', () => {
	it('takes the plans that are right, with names and extras left out or put in', () => {
		expect(readPlan(quarryTerrace()).ok).toBe(true);
		expect(readPlan(fourByFour()).ok).toBe(true);
		expect(
			faults((p) => {
				delete p.walls;
				delete p.name;
				delete p.curtains[0]!.enabled;
				delete p.curtains[0]!.name;
				p.note = 'kept elsewhere';
				p.zones = [];
			})
		).toEqual([]);
	});

	it.each<[string, (plan: Plan & Record<string, unknown>) => void]>([
		['latitude', (p) => (p.latitude = 91)],
		['latitude', (p) => (p.latitude = NaN)],
		['longitude', (p) => (p.longitude = -180.1)],
		['longitude', (p) => (p.longitude = Infinity)],
		['elevation', (p) => (p.elevation = bad('high'))],
		['timeZone', (p) => (p.timeZone = 'Europe/Nowhere')],
		['timeZone', (p) => (p.timeZone = '+01:00')],
		['skyline[2][0]', (p) => (p.skyline[2]![0] = 60)],
		['skyline[7][0]', (p) => (p.skyline[7]![0] = 360)],
		['skyline[0][1]', (p) => (p.skyline[0]![1] = 91)],
		['skyline', (p) => delete (p as Partial<Plan>).skyline],
		['curtains[0].to', (p) => (p.curtains[0]!.to = p.curtains[0]!.from)],
		['curtains[0].top', (p) => (p.curtains[0]!.top = 0.3)],
		['curtains[1].dropDiameter', (p) => (p.curtains[1]!.dropDiameter = 4)],
		['curtains[1].dropDiameter', (p) => (p.curtains[1]!.dropDiameter = 3001)],
		['curtains[1].waterTemperature', (p) => (p.curtains[1]!.waterTemperature = 61)],
		['curtains[1].enabled', (p) => (p.curtains[1]!.enabled = bad('yes'))],
		['curtains[1].from[0]', (p) => (p.curtains[1]!.from = [20_000, 0])],
		['walls[0].top', (p) => (p.walls![0]!.top = -1)],
		['walls[0].to', (p) => (p.walls![0]!.to = p.walls![0]!.from)],
		[
			'zones[0].outline',
			(p) =>
				(p.zones[0]!.outline = [
					[0, 0],
					[4, 4],
					[4, 0],
					[0, 5]
				])
		],
		[
			'zones[0].outline',
			(p) =>
				(p.zones[0]!.outline = [
					[0, 0],
					[4, 4],
					[8, 8]
				])
		],
		[
			'zones[0].outline',
			(p) =>
				(p.zones[0]!.outline = [
					[0, 0],
					[4, 4]
				])
		],
		['zones[0].eyeHeights', (p) => (p.zones[0]!.eyeHeights = [])],
		['zones[0].eyeHeights[1]', (p) => (p.zones[0]!.eyeHeights[1] = -0.1)],
		['zones[0].floor', (p) => (p.zones[0]!.floor = bad(null))],
		['rule.minimumArc', (p) => (p.rule.minimumArc = 0)],
		['rule.minimumArc', (p) => (p.rule.minimumArc = 361)],
		['rule.minimumShare', (p) => (p.rule.minimumShare = 0)],
		['rule.minimumShare', (p) => (p.rule.minimumShare = 1.01)],
		['rule.minimumSunAltitude', (p) => (p.rule.minimumSunAltitude = 0.4)],
		['rule', (p) => delete (p as Partial<Plan>).rule]
	])('names %s', (path, change) => {
		expect(faults(change)).toEqual([path]);
	});

	it('names every fault at once, also two of one curtain', () => {
		expect(
			faults((p) => {
				p.latitude = 91;
				p.curtains[0]!.top = 0;
				p.curtains[0]!.dropDiameter = bad('fine');
				p.curtains[0]!.to = p.curtains[0]!.from;
				p.rule.minimumShare = 2;
			}).sort()
		).toEqual([
			'curtains[0].dropDiameter',
			'curtains[0].to',
			'curtains[0].top',
			'latitude',
			'rule.minimumShare'
		]);
	});

	it('takes no plan for what is none', () => {
		for (const input of [null, undefined, 3, 'plan', []]) {
			const read = readPlan(input);
			expect(read.ok).toBe(false);
			if (!read.ok) expect(read.faults[0]!.path).toBe('plan');
		}
	});

	it('makes the engine refuse what the schema refuses', () => {
		const plan = { ...quarryTerrace(), latitude: 500 };
		expect(() => createSite(plan)).toThrow(RangeError);
		expect(() => createSite(plan)).toThrow('latitude');
	});
});

describe('outlines', () => {
	const square: Corner[] = [
		[0, 0],
		[8, 0],
		[8, 8],
		[0, 8]
	];

	it('have an area', () => {
		expect(polygonArea(square)).toBe(64);
		expect(
			polygonArea([
				[0, 0],
				[4, 0],
				[0, 3]
			])
		).toBe(6);
		expect(polygonArea([...square].reverse())).toBe(64);
	});

	it('cross themselves or not', () => {
		expect(crossesItself(square)).toBe(false);
		expect(crossesItself([...square, [0, 0]])).toBe(false);
		expect(
			crossesItself([
				[0, 0],
				[8, 8],
				[8, 0],
				[0, 8]
			])
		).toBe(true);
		// A spike that turns straight back, and a corner that touches an edge.
		expect(
			crossesItself([
				[0, 0],
				[8, 0],
				[4, 0],
				[4, 5]
			])
		).toBe(true);
		expect(
			crossesItself([
				[0, 0],
				[8, 0],
				[8, 8],
				[4, 0],
				[0, 8]
			])
		).toBe(true);
		// An L is simple.
		expect(
			crossesItself([
				[0, 0],
				[8, 0],
				[8, 3],
				[3, 3],
				[3, 8],
				[0, 8]
			])
		).toBe(false);
	});

	it('carry a lattice of spacing sqrt(area / 64) about the middle of their box', () => {
		// 8 x 8: spacing 1, points at -3..3 about the centre; those 4 off lie on the outline.
		const places = latticePlaces(square);
		expect(places.length).toBe(49);
		expect(places).toContainEqual({ x: 4, y: 4 });
		expect(places).toContainEqual({ x: 1, y: 7 });
	});

	it('halve the spacing until 16 eyes stand inside', () => {
		// Frame of a square: the area is small against the box, and the middle is empty.
		const ring: Corner[] = [
			[0, 0],
			[20, 0],
			[20, 20],
			[0.1, 20],
			[0.1, 19.9],
			[19.9, 19.9],
			[19.9, 0.1],
			[0, 0.1]
		];
		expect(latticePlaces(ring).length).toBeGreaterThanOrEqual(16);
		expect(
			latticePlaces([
				[0, 0],
				[1e-3, 0],
				[0, 1e-3]
			]).length
		).toBeGreaterThanOrEqual(16);
		expect(() =>
			latticePlaces([
				[0, 0],
				[1, 1],
				[2, 2]
			])
		).toThrow(RangeError);
	});
});
