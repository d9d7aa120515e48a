import { readFileSync } from 'node:fs';
import type { Plan } from '../../src/lib/schemas/plan';

const fixture = (name: string): Plan =>
	JSON.parse(readFileSync(new URL(`../fixtures/${name}.json`, import.meta.url), 'utf8')) as Plan;

/** Two curtains, one wall, a rectangular terrace. */
export const quarryTerrace = (): Plan => fixture('quarry-terrace');

/** Four curtains and four walls. */
export const fourByFour = (): Plan => fixture('four-by-four');

/** A square zone about (x, y), so small that its eyes stand in one place. */
export function pointZone(x: number, y: number, eyeHeight: number): Plan['zones'][number] {
	const r = 1e-4;
	return {
		name: 'Spot',
		outline: [
			[x - r, y - r],
			[x + r, y - r],
			[x + r, y + r],
			[x - r, y + r]
		],
		floor: 0,
		eyeHeights: [eyeHeight]
	};
}

/** A plan with a flat horizon and nothing in it, on the equator. */
export function barePlan(parts: Partial<Plan> = {}): Plan {
	return {
		name: 'Bare',
		latitude: 0,
		longitude: 0,
		elevation: 0,
		timeZone: 'UTC',
		skyline: [],
		curtains: [],
		walls: [],
		zones: [pointZone(0, 0, 1.6)],
		rule: { minimumArc: 30, minimumShare: 0.5, minimumSunAltitude: 3 },
		...parts
	};
}

/** A curtain of the common kind. */
export function curtain(
	from: [number, number],
	to: [number, number],
	parts: Partial<Plan['curtains'][number]> = {}
): Plan['curtains'][number] {
	return { name: 'Curtain', from, to, bottom: 0, top: 6, dropDiameter: 400, ...parts };
}

/** A wall of the common kind. */
export function wall(
	from: [number, number],
	to: [number, number],
	parts: Partial<NonNullable<Plan['walls']>[number]> = {}
): NonNullable<Plan['walls']>[number] {
	return { name: 'Wall', from, to, bottom: 0, top: 3, ...parts };
}
