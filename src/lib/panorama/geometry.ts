import { DEG_PER_RAD, RAD_PER_DEG } from '../optics/angles';

/**
 * How a picture lays directions on its pixels.
 *
 * `cylinder`: panoramas stitched while turning: bearings evenly along, heights by their tangent.
 * `sphere`: whole-sphere pictures: bearings and heights both evenly.
 * `plane`: one photo, by the tangent both ways, the camera held level.
 */
export type Projection = 'cylinder' | 'sphere' | 'plane';

/** A place in the picture whose direction is known. Pixels from the picture's left and top edges. */
export interface PanoramaMark {
	xPx: number;
	yPx: number;
	/** Clockwise from true north, degrees. */
	azimuthDeg: number;
	/** Above the level, degrees; null when only the bearing is known. */
	altitudeDeg: number | null;
}

/** What is known of a picture: its size, how it was taken, and two marks. */
export interface PanoramaView {
	widthPx: number;
	heightPx: number;
	projection: Projection;
	/** Two places, at different heights or not, but not one above the other. */
	marks: readonly [PanoramaMark, PanoramaMark];
}

/** A direction, degrees. */
export interface Direction {
	/** 0 to below 360. */
	azimuthDeg: number;
	altitudeDeg: number;
}

/** Directions of a picture's places. */
export interface PanoramaScale {
	/** Width of the picture, degrees. */
	fieldDeg: number;
	/** Row of the level at a column; the picture may be askew. */
	levelYPx(xPx: number): number;
	directionAt(xPx: number, yPx: number): Direction;
	/** The place of a direction; null when it is beside the picture. It may be above or below it. */
	placeAt(direction: Direction): { xPx: number; yPx: number } | null;
}

/** A single photo wider than this comes from no ordinary lens. */
const WIDEST_PHOTO_DEG = 130;
/** Marks nearer together than this part of the width say too little of the scale. */
const LEAST_APART = 0.02;

const turn = (deg: number) => ((deg % 360) + 360) % 360;

/**
 * Works out the scale of a picture from two marks. The level is where the marks' altitudes put it: of
 * both, then a picture that is askew is set right; of one, then it is level; of none, then it is the
 * picture's middle row. Of a single photo whose marks both stand near one edge two scales may tell the
 * same: the narrower is taken.
 * @throws RangeError that says what is wrong with the marks, for people
 */
export function panoramaScale({
	widthPx,
	heightPx,
	projection,
	marks
}: PanoramaView): PanoramaScale {
	const [left, right] = marks[0].xPx <= marks[1].xPx ? marks : [marks[1], marks[0]];
	const apartPx = right.xPx - left.xPx;
	if (!(apartPx >= LEAST_APART * widthPx)) {
		throw new RangeError('The marks must stand further apart, one beside the other.');
	}
	const apartDeg = turn(right.azimuthDeg - left.azimuthDeg);
	if (!(apartDeg >= 0.1)) {
		throw new RangeError('The marks must have different bearings.');
	}
	const middle = widthPx / 2;
	const focal =
		projection === 'plane'
			? photoFocalPx({ left: left.xPx - middle, right: right.xPx - middle, apartDeg, widthPx })
			: apartPx / (apartDeg * RAD_PER_DEG);
	const azimuthOf = (xPx: number) =>
		projection === 'plane'
			? Math.atan((xPx - middle) / focal) * DEG_PER_RAD
			: (xPx / focal) * DEG_PER_RAD;
	const fieldDeg = azimuthOf(widthPx) - azimuthOf(0);
	if (fieldDeg > 360.5) {
		throw new RangeError(
			`By these marks the picture would show ${Math.round(fieldDeg)}°, more than all round. Bearings grow from left to right.`
		);
	}
	/** Pixels that a height stands above the level. */
	const risePx = (xPx: number, altitudeDeg: number) => {
		if (projection === 'sphere') return altitudeDeg * RAD_PER_DEG * focal;
		return Math.tan(altitudeDeg * RAD_PER_DEG) * reach(xPx);
	};
	/** Distance of a column from the eye, in pixels along the level. */
	const reach = (xPx: number) => (projection === 'plane' ? Math.hypot(focal, xPx - middle) : focal);
	const levels = [left, right].flatMap(({ xPx, yPx, altitudeDeg }) =>
		altitudeDeg === null ? [] : [{ xPx, yPx: yPx + risePx(xPx, altitudeDeg) }]
	);
	const [first, second] = levels;
	const slope = first && second ? (second.yPx - first.yPx) / (second.xPx - first.xPx) : 0;
	const levelYPx = (xPx: number) => (first ? first.yPx + slope * (xPx - first.xPx) : heightPx / 2);
	const edgeDeg = left.azimuthDeg + azimuthOf(0) - azimuthOf(left.xPx);
	return {
		fieldDeg,
		levelYPx,
		directionAt(xPx, yPx) {
			const rise = levelYPx(xPx) - yPx;
			const altitudeDeg =
				projection === 'sphere'
					? (rise / focal) * DEG_PER_RAD
					: Math.atan2(rise, reach(xPx)) * DEG_PER_RAD;
			return {
				azimuthDeg: turn(edgeDeg + azimuthOf(xPx) - azimuthOf(0)),
				altitudeDeg: Math.max(-90, Math.min(90, altitudeDeg))
			};
		},
		placeAt({ azimuthDeg, altitudeDeg }) {
			const fromEdgeDeg = turn(azimuthDeg - edgeDeg);
			if (fromEdgeDeg > fieldDeg || Math.abs(altitudeDeg) > 89) return null;
			const angle = (fromEdgeDeg + azimuthOf(0)) * RAD_PER_DEG;
			const xPx = projection === 'plane' ? middle + focal * Math.tan(angle) : focal * angle;
			return { xPx, yPx: levelYPx(xPx) - risePx(xPx, altitudeDeg) };
		}
	};
}

/** Distance of a photo's plane, pixels, at which two columns stand so many degrees apart. */
function photoFocalPx({
	left,
	right,
	apartDeg,
	widthPx
}: {
	/** Columns from the middle. */
	left: number;
	right: number;
	apartDeg: number;
	widthPx: number;
}): number {
	const apartAt = (focal: number) =>
		(Math.atan(right / focal) - Math.atan(left / focal)) * DEG_PER_RAD;
	const widest = widthPx / 2 / Math.tan((WIDEST_PHOTO_DEG / 2) * RAD_PER_DEG);
	// With both marks on one side the angle is greatest here, and falls on either side of it.
	let near = Math.max(widest, Math.sqrt(Math.max(0, left * right)));
	let far = 1000 * widthPx;
	if (!(apartDeg <= apartAt(near)) || !(apartDeg >= apartAt(far))) {
		throw new RangeError(
			'No photo has these bearings so far apart. If it was stitched from several, choose panorama.'
		);
	}
	for (let i = 0; i < 100; i++) {
		const between = (near + far) / 2;
		if (apartAt(between) > apartDeg) near = between;
		else far = between;
	}
	return near;
}
