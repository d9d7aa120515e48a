import type { Eye, SeenArc, Site } from '../optics';
import type { Place } from './geometry';

/** The bow as it stands on one curtain for an eye: metres along it and above datum. */
export interface FaceArc {
	curtainIndex: number;
	/** The line of the ring, in order. */
	line: Place[];
	/** Metres that a degree of the ring's radius measures there, about. */
	metresPerDeg: number;
}

/** The bow on the curtains' faces. */
export function faceArcs(arcs: readonly SeenArc[], eye: Eye): FaceArc[] {
	return arcs.flatMap(({ curtainIndex, points }) => {
		const first = points[0];
		if (!first || points.length < 2) return [];
		const farM = Math.hypot(first.x - eye.x, first.y - eye.y, first.z - eye.z);
		return [
			{
				curtainIndex,
				line: points.map(({ alongM, z }): Place => [alongM, z]),
				metresPerDeg: (farM * Math.PI) / 180
			}
		];
	});
}

/**
 * A line beside another, at a distance to its left as it runs. The ring runs clockwise as it is seen,
 * so that left is outwards when the curtain is seen from the eye's side.
 */
export function besideLine(line: readonly Place[], distance: number): Place[] {
	return line.map(([x, y], i) => {
		const before = line[Math.max(0, i - 1)]!;
		const after = line[Math.min(line.length - 1, i + 1)]!;
		const [dx, dy] = [after[0] - before[0], after[1] - before[1]];
		const long = Math.hypot(dx, dy) || 1;
		return [x - (dy / long) * distance, y + (dx / long) * distance];
	});
}

/**
 * Whether an eye sees a curtain with its first end on the left. Seen from the other side the face is
 * drawn the other way round, as the visitor sees it.
 */
export function firstEndIsLeft(site: Site, curtainIndex: number, eye: Eye): boolean {
	const curtain = site.curtains[curtainIndex]!;
	const across = curtain.acrossX * (eye.x - curtain.x) + curtain.acrossY * (eye.y - curtain.y);
	// Across points to the left of along: an eye on that side has the first end on its right.
	return across < 0;
}
