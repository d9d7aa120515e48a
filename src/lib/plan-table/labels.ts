import type { Plan } from '../schemas/plan';
import { middleOf, middleOfOutline, type Place } from './geometry';
import { nameOf, partsOf, pathOf, samePart, sheetAt, zoneAt, type PartRef } from './parts';
import { toScreen, type View } from './view';

/** Where a part's name is written: the text's middle or end, on its base line, pixels. */
export interface Label {
	x: number;
	y: number;
	anchor: 'start' | 'middle' | 'end';
}

interface Box {
	left: number;
	right: number;
	top: number;
	bottom: number;
}

/** About the width of a letter of the drawing's type, and its height with some air. */
const LETTER_PX = 7.2;
const ASCENT_PX = 12;
const DESCENT_PX = 4;
const EDGE_PX = 4;

function boxOf({ x, y, anchor }: Label, letters: number): Box {
	const width = letters * LETTER_PX;
	const left = anchor === 'start' ? x : anchor === 'end' ? x - width : x - width / 2;
	return { left, right: left + width, top: y - ASCENT_PX, bottom: y + DESCENT_PX };
}

const touch = (a: Box, b: Box) =>
	a.left < b.right && b.left < a.right && a.top < b.bottom && b.top < a.bottom;

/** Places for a name in the order in which they are tried. */
function candidates(view: View, plan: Plan, ref: PartRef): Label[] {
	const zone = zoneAt(plan, ref);
	const sheet = sheetAt(plan, ref);
	const round = ([x, top, bottom, left, right]: [number, number, number, number, number]) => {
		const middle = (top + bottom) / 2 + 4;
		return [
			{ x, y: bottom + 22, anchor: 'middle' },
			{ x, y: top - 12, anchor: 'middle' },
			{ x: right + 12, y: middle, anchor: 'start' },
			{ x: left - 12, y: middle, anchor: 'end' }
		] satisfies Label[];
	};
	if (zone) {
		const corners = zone.outline.map((place) => toScreen(view, place));
		const [xs, ys] = [corners.map(([x]) => x), corners.map(([, y]) => y)];
		const [x] = toScreen(view, middleOfOutline(zone.outline));
		return round([x, Math.min(...ys), Math.max(...ys), Math.min(...xs), Math.max(...xs)]);
	}
	if (!sheet) return [];
	const [from, to] = [toScreen(view, sheet.from), toScreen(view, sheet.to)];
	const steep = Math.abs(to[1] - from[1]) > Math.abs(to[0] - from[0]);
	const [middle, low, high]: [Place, Place, Place] = [
		toScreen(view, middleOf(sheet)),
		to[1] > from[1] ? to : from,
		to[1] > from[1] ? from : to
	];
	// Beside a line that runs north to south, under and over one that runs east to west.
	if (!steep) return round([middle[0], middle[1], middle[1] + 2, middle[0], middle[0]]).slice(0, 2);
	return [
		{ x: low[0], y: low[1] + 24, anchor: 'middle' },
		{ x: middle[0] + 12, y: middle[1] + 4, anchor: 'start' },
		{ x: middle[0] - 12, y: middle[1] + 4, anchor: 'end' },
		{ x: high[0], y: high[1] - 14, anchor: 'middle' }
	];
}

/** Pushed in where it would leave the drawing. */
function inside(label: Label, letters: number, { widthPx }: View): Label {
	const { left, right } = boxOf(label, letters);
	if (left < EDGE_PX) return { ...label, x: label.x + EDGE_PX - left };
	if (right > widthPx - EDGE_PX) return { ...label, x: label.x + widthPx - EDGE_PX - right };
	return label;
}

/**
 * Places for the names of all parts such that none lies on another: the selected part's first, then
 * curtains, zones, walls. A name without a free place is left out; the part is in the list of what stands there.
 * @param taken boxes that hold other writing, pixels
 * @param area the zones are free areas, in which other things are drawn: their names go above
 * @returns the place by the part's path
 */
export function placeLabels(
	view: View,
	plan: Plan,
	selected: PartRef | null,
	{ taken = [], area = false }: { taken?: readonly Box[]; area?: boolean } = {}
): Map<string, Label> {
	const weight = ({ kind }: PartRef) => ({ curtains: 0, zones: 1, walls: 2 })[kind];
	const parts = partsOf(plan).sort(
		(a, b) => Number(samePart(b, selected)) - Number(samePart(a, selected)) || weight(a) - weight(b)
	);
	const boxes = [...taken];
	const placed = new Map<string, Label>();
	for (const ref of parts) {
		// Two more for the mark of a fault.
		const letters = nameOf(plan, ref).length + 2;
		const [under, over, ...beside] = candidates(view, plan, ref);
		const inOrder = area ? [over, under, ...beside] : [under, over, ...beside];
		const tried = inOrder
			.flatMap((label) => label ?? [])
			.filter(({ x, y }) => Number.isFinite(x) && Number.isFinite(y))
			.map((label) => inside(label, letters, view));
		const free = tried.find((label) => !boxes.some((box) => touch(box, boxOf(label, letters))));
		const label = free ?? (samePart(ref, selected) ? tried[0] : undefined);
		if (!label) continue;
		placed.set(pathOf(ref), label);
		boxes.push(boxOf(label, letters));
	}
	return placed;
}

/** The sun's own writing, pixels. */
export const sunLabelBox = (x: number, y: number): Box => ({
	left: x - 58,
	right: x + 58,
	top: y - ASCENT_PX,
	bottom: y + DESCENT_PX
});
