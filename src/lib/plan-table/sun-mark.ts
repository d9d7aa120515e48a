import type { SunPosition } from '../optics';
import { placeAt, type Place } from './geometry';
import { toScreen, type View } from './view';

/** Where the sun is drawn about a place: on its bearing, inside the drawing wherever the place is. Pixels. */
export function sunMark(view: View, sun: SunPosition, middle: Place) {
	const reachPx = Math.min(view.widthPx, view.heightPx) / 2 - 30;
	const at = toScreen(view, middle);
	const [east, north] = placeAt([0, 0], sun.azimuthDeg, 1);
	const towards: Place = [east, -north];
	const disc: Place = [
		Math.min(view.widthPx - 26, Math.max(26, at[0] + towards[0] * reachPx)),
		Math.min(view.heightPx - 40, Math.max(26, at[1] + towards[1] * reachPx))
	];
	const labelX = Math.min(view.widthPx - 58, Math.max(58, disc[0]));
	return { reachPx, at, towards, disc, labelX, labelY: disc[1] + 27 };
}
