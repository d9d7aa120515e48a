import type { Plan } from '../schemas/plan';
import type { Place } from './geometry';

/** What part of the ground the drawing shows. */
export interface View {
	/** Metres in the site frame at the middle of the drawing. */
	readonly centre: Place;
	readonly pxPerM: number;
	readonly widthPx: number;
	readonly heightPx: number;
}

/** A hundred metres a pixel to a millimetre a pixel or so: every plan that the schema takes fits. */
const LEAST_PX_PER_M = 0.02;
const MOST_PX_PER_M = 800;

const withinScale = (pxPerM: number) => Math.min(MOST_PX_PER_M, Math.max(LEAST_PX_PER_M, pxPerM));

/** Pixels from the drawing's top left corner. */
export function toScreen(view: View, [x, y]: Place): Place {
	return [
		view.widthPx / 2 + (x - view.centre[0]) * view.pxPerM,
		view.heightPx / 2 - (y - view.centre[1]) * view.pxPerM
	];
}

/** The place under a pixel. */
export function toGround(view: View, [px, py]: Place): Place {
	return [
		view.centre[0] + (px - view.widthPx / 2) / view.pxPerM,
		view.centre[1] - (py - view.heightPx / 2) / view.pxPerM
	];
}

export const pannedBy = (view: View, dxPx: number, dyPx: number): View => ({
	...view,
	centre: [view.centre[0] - dxPx / view.pxPerM, view.centre[1] + dyPx / view.pxPerM]
});

/** Nearer or farther, with the place under a pixel staying under it. */
export function zoomedAt(view: View, factor: number, at: Place): View {
	const fixed = toGround(view, at);
	const next = { ...view, pxPerM: withinScale(view.pxPerM * factor) };
	const [px, py] = toScreen(next, fixed);
	return pannedBy(next, at[0] - px, at[1] - py);
}

/** The whole plan with room around it; an empty plan shows twenty metres about the datum. */
export function fitted(plan: Plan, widthPx: number, heightPx: number): View {
	const places: Place[] = [
		...plan.curtains.flatMap(({ from, to }) => [from, to]),
		...(plan.walls ?? []).flatMap(({ from, to }) => [from, to]),
		...plan.zones.flatMap(({ outline }) => outline)
	].filter((place) => place.every(Number.isFinite));
	if (places.length < 2) places.push([-10, -10], [10, 10]);
	const xs = places.map(([x]) => x);
	const ys = places.map(([, y]) => y);
	const [west, east] = [Math.min(...xs), Math.max(...xs)];
	const [south, north] = [Math.min(...ys), Math.max(...ys)];
	const marginPx = Math.min(60, widthPx * 0.11);
	return {
		centre: [(west + east) / 2, (south + north) / 2],
		pxPerM: withinScale(
			Math.min(
				(widthPx - 2 * marginPx) / Math.max(1, east - west),
				(heightPx - 2 * marginPx) / Math.max(1, north - south)
			)
		),
		widthPx,
		heightPx
	};
}

/** The longest of 1, 2 or 5 times a power of ten metres that is no wider than so many pixels. */
export function roundLengthM(view: View, mostPx: number): number {
	const wish = mostPx / view.pxPerM;
	const power = 10 ** Math.floor(Math.log10(wish));
	return [5, 2].map((n) => n * power).find((length) => length <= wish) ?? power;
}

/** Metres of the grid's lines, about thirty pixels apart at least, and where they lie. */
export function gridLines(view: View): { stepM: number; xs: number[]; ys: number[] } {
	let stepM = roundLengthM(view, 30);
	while (stepM * view.pxPerM < 24) stepM *= 2;
	const [west, north] = toGround(view, [0, 0]);
	const [east, south] = toGround(view, [view.widthPx, view.heightPx]);
	const lines = (from: number, to: number) =>
		Array.from(
			{ length: Math.max(0, Math.floor(to / stepM) - Math.ceil(from / stepM) + 1) },
			(_, i) => (Math.ceil(from / stepM) + i) * stepM
		);
	return { stepM, xs: lines(west, east), ys: lines(south, north) };
}
