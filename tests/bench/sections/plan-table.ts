import {
	createSite,
	stateAt,
	sunPosition,
	type Site,
	type SunPosition
} from '../../../src/lib/optics';
import { draggedPlan } from '../../../src/lib/plan-table/drag';
import { faceArcs } from '../../../src/lib/plan-table/face';
import { shadowOf } from '../../../src/lib/plan-table/geometry';
import { tableDay } from '../../../src/lib/plan-table/moment';
import { arcsFor, bandOf, litParts, middleEye, spotsOf } from '../../../src/lib/plan-table/seen';
import type { Plan } from '../../../src/lib/schemas/plan';
import { fourByFour, quarryTerrace } from '../../support/plans';
import { medianTimesMs, type Measure, type Section } from '../measure';

/** The table is to stay above 50 frames a second. */
const FRAME_MS = 1000 / 50;
const FRAMES = 200;
const START_MS = Date.UTC(2027, 2, 18, 8);

/** The bow on the curtains, from above and upright. */
function drawn(site: Site, plan: Plan, sun: SunPosition): number {
	const eye = middleEye(site, plan.zones[0]!, 0)!;
	const arcs = arcsFor(site, eye, sun);
	return litParts(arcs).length + faceArcs(arcs, eye).length;
}

/** What a moment costs beside drawing it: state, spots, shadows, and the bow on the curtains. */
function momentFrames(plan: Plan): number {
	const site = createSite(plan);
	let sum = 0;
	for (let frame = 0; frame < FRAMES; frame++) {
		const instantMs = START_MS + frame * 60_000;
		const sun = sunPosition({ instantMs, ...site });
		const state = stateAt(site, instantMs);
		for (const [i, zone] of state.zones.entries()) {
			sum += spotsOf(zone, plan.zones[i]!.eyeHeights.length).length;
		}
		for (const wall of plan.walls ?? []) sum += shadowOf(wall, sun)?.length ?? 0;
		sum += drawn(site, plan, sun);
	}
	return sum;
}

/** The same while a curtain is being dragged: the plan is another one in every frame. */
function dragFrames(plan: Plan): number {
	let sum = 0;
	for (let frame = 0; frame < FRAMES; frame++) {
		const drag = { act: 'move', ref: { kind: 'curtains', index: 0 }, start: [0, 0] } as const;
		const to: [number, number] = [frame / 100, frame / 150];
		const free = { stepM: null, rightAngles: false };
		const dragged = draggedPlan(plan, { ...drag, start: [0, 0] }, to, free);
		const site = createSite(dragged);
		const state = stateAt(site, START_MS);
		sum += state.zones[0]!.share;
		sum += drawn(site, dragged, state.sun);
	}
	return sum;
}

function bandFrames(plan: Plan): number {
	const site = createSite(plan);
	return bandOf(site, tableDay(plan.timeZone, '2027-03-18'), 0).windows.length;
}

function run(): Measure[] {
	const example = quarryTerrace();
	const busy = fourByFour();
	const spots = createSite(example).zones[0]!.eyes.length / example.zones[0]!.eyeHeights.length;
	const times = medianTimesMs(
		{
			moment: () => momentFrames(example),
			busyMoment: () => momentFrames(busy),
			drag: () => dragFrames(example),
			busyDrag: () => dragFrames(busy),
			band: () => bandFrames(example),
			busyBand: () => bandFrames(busy)
		},
		5
	);
	const frames = (name: string, ms: number): Measure => ({
		name: `${name} in frames of 50 Hz (at most 0.5)`,
		value: ms / FRAMES / FRAME_MS,
		unit: 'frames'
	});
	return [
		{ name: 'spots of the example plan', value: spots, unit: 'spots' },
		frames('a moment of the example plan', times.moment),
		frames('a moment of the busy plan', times.busyMoment),
		frames('a drag step of the example plan', times.drag),
		frames('a drag step of the busy plan', times.busyDrag),
		{ name: 'band of a day of the example plan', value: times.band, unit: 'ms' },
		{ name: 'band of a day of the busy plan', value: times.busyBand, unit: 'ms' }
	];
}

/** The computing part of a frame of the plan table; drawing it is measured by the browser test. */
export const planTableSection: Section = { name: 'plan-table', run };
