import { DEG_PER_RAD, RAD_PER_DEG } from './angles';
import { angleOfPseudo, RING_END, RING_START } from './arc-set';
import { ringDirection, ringFrame, type RingFrame } from './ring';
import { Sight } from './sight';
import type { Curtain, Eye, Site } from './site';
import type { SunPosition } from './sun';

/** A point of the bow on a curtain. */
export interface CurtainPoint {
	/** Place on the ring, degrees, 0 at its top, growing to the viewer's right. */
	readonly phiDeg: number;
	/** Metres in the site frame. */
	readonly x: number;
	readonly y: number;
	readonly z: number;
	/** Metres along the curtain from its `from` end. */
	readonly alongM: number;
}

/** A piece of the bow that an eye sees in one curtain. */
export interface SeenArc {
	/** Place of the curtain in the plan, from 0. */
	readonly curtainIndex: number;
	readonly curtain: string;
	/** First phi seen, -180 to 180 degrees. */
	readonly startDeg: number;
	/** Last phi seen: above startDeg by at most 360, so it may pass 180. */
	readonly endDeg: number;
	/** The piece on the curtain for drawing, both ends among them, at most `spacingDeg` of phi apart. */
	readonly points: readonly CurtainPoint[];
}

/**
 * Where the ray from an eye along direction phi of the ring meets a curtain's plane.
 * @returns null when the ray does not go towards the plane
 */
function pointOn({
	curtain,
	frame,
	eye,
	phiDeg
}: {
	curtain: Curtain;
	frame: RingFrame;
	eye: Eye;
	phiDeg: number;
}): CurtainPoint | null {
	const direction = ringDirection({ frame, radiusDeg: curtain.radiusDeg, phiDeg });
	const distance = curtain.acrossX * (curtain.x - eye.x) + curtain.acrossY * (curtain.y - eye.y);
	const t = distance / (curtain.acrossX * direction.x + curtain.acrossY * direction.y);
	if (!(t > 0 && Number.isFinite(t))) return null;
	const x = eye.x + t * direction.x;
	const y = eye.y + t * direction.y;
	return {
		phiDeg,
		x,
		y,
		z: eye.z + t * direction.z,
		alongM: curtain.alongX * (x - curtain.x) + curtain.alongY * (y - curtain.y)
	};
}

/**
 * The pieces of the bow that one eye sees in each enabled curtain under a given sun, with their points
 * on the curtain in metres. The ends are exact (no stepping finds them); the points between them are for
 * drawing. A piece over the ring's lowest place is one piece.
 *
 * @param eye metres in the site frame
 * @param spacingDeg greatest phi between two points, above 0; 2 when absent
 * @throws RangeError when the sun's position or the spacing is out of range, or the eye is not finite
 */
export function seenArcs({
	site,
	eye,
	sun,
	spacingDeg = 2
}: {
	site: Site;
	eye: Eye;
	sun: SunPosition;
	spacingDeg?: number;
}): SeenArc[] {
	if (![eye.x, eye.y, eye.z].every(Number.isFinite)) throw new RangeError('eye must be finite');
	if (!(spacingDeg >= 0.01)) throw new RangeError('spacingDeg must be 0.01 or more');
	const frame = ringFrame(sun);
	const sight = new Sight(site, [eye]);
	sight.setSun(frame);
	return sight.enabledCurtains.flatMap((curtainIndex, enabled) => {
		const curtain = site.curtains[curtainIndex]!;
		const { set, count } = sight.seenIn(0, enabled);
		return piecesOf(set, count).map(([startDeg, endDeg]) => {
			const steps = Math.max(1, Math.ceil((endDeg - startDeg) / spacingDeg));
			const points: CurtainPoint[] = [];
			for (let i = 0; i <= steps; i++) {
				const phiDeg = startDeg + ((endDeg - startDeg) * i) / steps;
				const point = pointOn({ curtain, frame, eye, phiDeg });
				if (point) points.push(point);
			}
			return { curtainIndex, curtain: curtain.name, startDeg, endDeg, points };
		});
	});
}

/** Pieces of a set in degrees; one that reaches both ends of the range is joined over its lowest place. */
function piecesOf(set: Float64Array, count: number): [number, number][] {
	const pieces: [number, number][] = [];
	for (let i = 0; i < count; i++) {
		pieces.push([
			angleOfPseudo(set[2 * i]!) * DEG_PER_RAD,
			angleOfPseudo(set[2 * i + 1]!) * DEG_PER_RAD
		]);
	}
	const joins = count > 1 && set[0] === RING_START && set[2 * count - 1] === RING_END;
	if (joins) {
		const [, firstEnd] = pieces.shift()!;
		const [lastStart] = pieces.pop()!;
		pieces.push([lastStart, firstEnd + 360]);
	}
	return pieces;
}

/** Altitude in degrees of the top of a bow: its radius less the sun's altitude. */
export function bowTopDeg(radiusDeg: number, sun: SunPosition): number {
	return Math.asin(ringDirection({ frame: ringFrame(sun), radiusDeg, phiDeg: 0 }).z) / RAD_PER_DEG;
}
