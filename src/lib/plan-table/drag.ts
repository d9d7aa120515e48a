import type { Plan } from '../schemas/plan';
import { boundingBox } from '../optics/polygon';
import { bearingDeg, middleOf, middleOfOutline, resizedOutline, type Place } from './geometry';
import {
	bearingsBeside,
	movedPart,
	nameOf,
	resizedPart,
	sheetAt,
	turnedPart,
	withNewPart,
	withPart,
	zoneAt,
	type PartKind,
	type PartRef
} from './parts';
import { quarters, snapBearing, snapPlace, type Anchor, type Snap } from './snap';

/** What a pointer holds. Places are metres; `start` is where it took hold. */
export type Drag =
	| { act: 'move'; ref: PartRef; start: Place }
	| { act: 'end'; ref: PartRef; end: 'from' | 'to' }
	| { act: 'turn'; ref: PartRef; start: Place }
	| { act: 'corner'; ref: PartRef; corner: number }
	| { act: 'size'; ref: PartRef }
	| { act: 'draw'; kind: PartKind; start: Place };

/** Where the lines from a corner's neighbours make right angles, with their other sides or with north. */
function cornerAnchors(outline: readonly Place[], corner: number, beside: number[]): Anchor[] {
	const n = outline.length;
	const at = (i: number) => outline[(corner + i + n) % n]!;
	return ([-1, 1] as const).map((side) => ({
		at: at(side),
		bearingsDeg: [...quarters(bearingDeg(at(2 * side), at(side))), ...beside]
	}));
}

/**
 * The plan as a drag leaves it.
 * @param base the plan when the drag began
 * @param to where the pointer is now, metres
 */
export function draggedPlan(base: Plan, drag: Drag, to: Place, snap: Snap): Plan {
	if (drag.act === 'draw') {
		const from = snapPlace(drag.start, snap);
		const anchors =
			drag.kind === 'zones' ? [] : [{ at: from, bearingsDeg: bearingsBeside(base, null) }];
		return withNewPart(base, drag.kind, from, snapPlace(to, snap, anchors)).plan;
	}
	const { ref } = drag;
	const sheet = sheetAt(base, ref);
	const zone = zoneAt(base, ref);
	const beside = bearingsBeside(base, ref);
	const first = sheet?.from ?? zone?.outline[0];
	if (!first) return base;
	switch (drag.act) {
		case 'move': {
			const [dx, dy] = [to[0] - drag.start[0], to[1] - drag.start[1]];
			// The part's first corner goes to the grid; the rest goes with it.
			const free = { ...snap, rightAngles: false };
			const [x, y] = snapPlace([first[0] + dx, first[1] + dy], free);
			return movedPart(base, ref, [x - first[0], y - first[1]]);
		}
		case 'end': {
			if (!sheet) return base;
			const other = drag.end === 'from' ? sheet.to : sheet.from;
			const place = snapPlace(to, snap, [{ at: other, bearingsDeg: beside }]);
			return withPart(base, ref, { [drag.end]: place });
		}
		case 'turn': {
			const middle = sheet ? middleOf(sheet) : middleOfOutline(zone!.outline);
			const by = bearingDeg(middle, to) - bearingDeg(middle, drag.start);
			const was = sheet
				? bearingDeg(sheet.from, sheet.to)
				: bearingDeg(zone!.outline[0]!, zone!.outline[1]!);
			const next = snapBearing((was + by + 720) % 360, snap, beside);
			return turnedPart(base, ref, next - was);
		}
		case 'corner': {
			if (!zone) return base;
			const anchors = cornerAnchors(zone.outline, drag.corner, beside);
			const place = snapPlace(to, snap, anchors);
			const outline = zone.outline.map((corner, i) => (i === drag.corner ? place : corner));
			return withPart(base, ref, { outline });
		}
		case 'size': {
			if (!zone) return base;
			const { west, south } = boundingBox(zone.outline);
			const [x, y] = snapPlace(to, { ...snap, rightAngles: false });
			const least = snap.stepM ?? 0.1;
			const [width, depth] = [Math.max(least, x - west), Math.max(least, y - south)];
			return withPart(base, ref, { outline: resizedOutline(zone.outline, width, depth) });
		}
	}
}

/** Metres that an arrow key moves when snapping is off. */
const FINE_STEP_M = 0.05;

const arrows: Record<string, Place> = {
	ArrowLeft: [-1, 0],
	ArrowRight: [1, 0],
	ArrowUp: [0, 1],
	ArrowDown: [0, -1]
};

/** Which way an arrow key goes, in snap steps, x east and y north; null for other keys. */
export function arrowStep(key: string, snap: Snap): Place | null {
	const arrow = arrows[key];
	const step = snap.stepM ?? FINE_STEP_M;
	return arrow ? [arrow[0] * step, arrow[1] * step] : null;
}

/**
 * The plan after an arrow key on a part: it moves; with Shift it turns (by 5 degrees, without snapping
 * by 0.5); with Alt it gets longer or shorter, a zone wider, narrower, deeper or less deep.
 */
export function arrowPlan(
	plan: Plan,
	ref: PartRef,
	key: { key: string; shiftKey: boolean; altKey: boolean },
	snap: Snap
): Plan | null {
	const step = arrowStep(key.key, snap);
	if (!step) return null;
	if (key.shiftKey) {
		const clockwise = key.key === 'ArrowRight' || key.key === 'ArrowDown';
		return turnedPart(plan, ref, (clockwise ? 1 : -1) * (snap.stepM === null ? 0.5 : 5));
	}
	return key.altKey ? resizedPart(plan, ref, step) : movedPart(plan, ref, step);
}

/** What a drag or key did, for those who hear the page. */
export function partWords(plan: Plan, ref: PartRef): string {
	const sheet = sheetAt(plan, ref);
	const place = ([x, y]: Place) => `${x}; ${y}`;
	if (sheet) return `${nameOf(plan, ref)} from ${place(sheet.from)} to ${place(sheet.to)} m`;
	const zone = zoneAt(plan, ref);
	return zone ? `${nameOf(plan, ref)}, corners ${zone.outline.map(place).join(', ')} m` : '';
}
