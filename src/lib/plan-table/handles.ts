import { boundingBox } from '../optics/polygon';
import type { Plan } from '../schemas/plan';
import type { Drag } from './drag';
import { arrowStep } from './drag';
import {
	bearingDeg,
	middleOf,
	middleOfOutline,
	placeAt,
	tidyPlace,
	withCorner,
	withoutCorner,
	type Place
} from './geometry';
import { nameOf, resizedPart, sheetAt, turnedPart, withPart, zoneAt, type PartRef } from './parts';
import type { Snap } from './snap';

/** A handle of the selected part: an end, a corner, the middle of an edge, or one to turn or size by. */
export type Handle = { label: string; at: Place } & (
	| { act: 'end'; end: 'from' | 'to' }
	| { act: 'corner' | 'edge'; corner: number }
	| { act: 'turn' | 'size' }
);

/** The handles of a part. @param besideM how far from the part the turning handle stands, metres */
export function handlesOf(plan: Plan, part: PartRef, besideM: number): Handle[] {
	const name = nameOf(plan, part);
	const sheet = sheetAt(plan, part);
	if (sheet) {
		const across = bearingDeg(sheet.from, sheet.to) - 90;
		return [
			{ act: 'end', end: 'from', at: sheet.from, label: `First end of ${name}` },
			{ act: 'end', end: 'to', at: sheet.to, label: `Second end of ${name}` },
			{ act: 'turn', at: placeAt(middleOf(sheet), across, besideM), label: `Turn ${name}` }
		];
	}
	const outline = zoneAt(plan, part)?.outline;
	if (!outline || outline.length === 0) return [];
	const { east, north } = boundingBox(outline);
	const size = besideM / 1.6;
	const label = `Width and depth of ${name}`;
	return [
		...outline.map((at, corner) => ({
			act: 'corner' as const,
			corner,
			at,
			label: `Corner ${corner + 1} of ${name}`
		})),
		...outline.map((from, corner) => ({
			act: 'edge' as const,
			corner,
			at: middleOf({ from, to: outline[(corner + 1) % outline.length]! }),
			label: `New corner after corner ${corner + 1} of ${name}`
		})),
		// Off the middle, where the handle of the northern edge stands.
		{ act: 'turn', at: [middleOfOutline(outline)[0], north + besideM], label: `Turn ${name}` },
		{ act: 'size', at: [east + size, north + size], label }
	];
}

/**
 * What a pointer that takes a handle drags. On the middle of an edge a corner is made first.
 * @returns the plan to drag from as well, when it is a new one
 */
export function dragOfHandle(
	plan: Plan,
	ref: PartRef,
	handle: Handle,
	start: Place
): { drag: Drag; plan?: Plan } {
	switch (handle.act) {
		case 'end':
			return { drag: { act: 'end', ref, end: handle.end } };
		case 'turn':
			return { drag: { act: 'turn', ref, start } };
		case 'size':
			return { drag: { act: 'size', ref } };
		case 'corner':
			return { drag: { act: 'corner', ref, corner: handle.corner } };
		case 'edge': {
			const outline = withCorner(zoneAt(plan, ref)?.outline ?? [], handle.corner);
			return {
				drag: { act: 'corner', ref, corner: handle.corner + 1 },
				plan: withPart(plan, ref, { outline })
			};
		}
	}
}

/**
 * The plan after a key on a handle: arrows move an end or a corner, turn, or size; Enter on the middle of
 * an edge makes a corner there, Delete on a corner takes it out. Null for keys that do nothing.
 */
export function handleKeyPlan(
	plan: Plan,
	ref: PartRef,
	handle: Handle,
	event: { key: string; altKey: boolean },
	snap: Snap
): Plan | null {
	const { key } = event;
	const zone = zoneAt(plan, ref);
	const sheet = sheetAt(plan, ref);
	const step = arrowStep(key, snap);
	const nudged = ([x, y]: Place) => tidyPlace([x + (step?.[0] ?? 0), y + (step?.[1] ?? 0)]);
	if (zone && handle.act === 'edge') {
		if (key !== 'Enter' && key !== ' ') return null;
		return withPart(plan, ref, { outline: withCorner(zone.outline, handle.corner) });
	}
	if (zone && handle.act === 'corner' && (key === 'Delete' || key === 'Backspace')) {
		return withPart(plan, ref, { outline: withoutCorner(zone.outline, handle.corner) });
	}
	if (!step) return null;
	if (handle.act === 'turn') {
		const clockwise = key === 'ArrowRight' || key === 'ArrowDown';
		const fine = event.altKey || snap.stepM === null;
		return turnedPart(plan, ref, (clockwise ? 1 : -1) * (fine ? 0.5 : 5));
	}
	if (handle.act === 'size') return resizedPart(plan, ref, step);
	if (sheet && handle.act === 'end') {
		return withPart(plan, ref, { [handle.end]: nudged(sheet[handle.end]) });
	}
	if (zone && handle.act === 'corner') {
		const outline = zone.outline.map((at, i) => (i === handle.corner ? nudged(at) : at));
		return withPart(plan, ref, { outline });
	}
	return null;
}
