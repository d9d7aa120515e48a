import { z } from 'zod';
import { panoramaScale, type PanoramaView, type Projection } from '../panorama/geometry';
import type { TracePoint } from '../panorama/trace';
import { skylineSchema, type Skyline } from './plan';
import { typedNumber, typedRows } from './plan-form';

export const projections = ['cylinder', 'sphere', 'plane'] as const satisfies Projection[];

/** Most places of a traced line. */
export const mostTracePoints = 2000;
/** Longest text of corners: a few thousand lines. */
export const mostCornersLength = 60_000;

/** Fields stay the text that was typed, so that every answer gives it back; `readPanorama` reads them. */
const number = (what: string, least: number, greatest: number) =>
	z.string().refine(
		(text) => {
			const value = typedNumber(text);
			return value >= least && value <= greatest;
		},
		{ error: `Give ${what} from ${least} to ${greatest}.` }
	);

const azimuth = number('a bearing', 0, 360);
const pixels = number('a place in the picture', 0, 100_000);
const altitude = z.string().refine(
	(text) => {
		const value = typedNumber(text);
		return text.trim() === '' || (value >= -89 && value <= 89);
	},
	{ error: 'Give an altitude from -89 to 89, or nothing.' }
);

const pointsShape = z
	.array(z.object({ xPx: z.number().min(-1e6).max(1e6), yPx: z.number().min(-1e6).max(1e6) }))
	.max(mostTracePoints);

/** The traced line, as the page's script sends it; null when it is none. */
function readPoints(text: string): TracePoint[] | null {
	try {
		const read = pointsShape.safeParse(JSON.parse(text || '[]'));
		return read.success ? read.data : null;
	} catch {
		return null;
	}
}

/** Corners as lines of azimuth and altitude; clockwise, over north if need be. */
function cornersFault(text: string): string | null {
	const rows = typedRows(text);
	const inOrder = [...rows].sort(([a = 0], [b = 0]) => a - b);
	const read = skylineSchema.safeParse(inOrder);
	if (read.success) return null;
	const wrong = rows.findIndex(
		([azimuthDeg, altitudeDeg, ...more]) =>
			!(azimuthDeg! >= 0 && azimuthDeg! < 360) || !Number.isFinite(altitudeDeg) || more.length > 0
	);
	if (wrong >= 0) return `Line ${wrong + 1} is no pair of azimuth (0 to below 360) and altitude.`;
	const message = read.error.issues[0]?.message ?? 'can not be read';
	return `In the order of azimuths, one ${message}.`;
}

/** What the panorama's page sends: how the picture lies, the line, and where it shall go. */
export const panoramaSchema = z.object({
	projection: z.enum(projections, 'Choose how the picture was taken.'),
	azimuth1: azimuth,
	altitude1: altitude,
	x1: pixels,
	y1: pixels,
	azimuth2: azimuth,
	altitude2: altitude,
	x2: pixels,
	y2: pixels,
	points: z.string().refine((text) => readPoints(text) !== null, {
		error: 'The line can not be read. Draw it again.'
	}),
	corners: z
		.string()
		.max(mostCornersLength, `That is too long: at most ${mostCornersLength} characters.`)
		.superRefine((text, context) => {
			const fault = text.length <= mostCornersLength ? cornersFault(text) : null;
			if (fault) context.addIssue({ code: 'custom', message: fault });
		}),
	/** Number of the version that takes the skyline. */
	version: z.string().regex(/^\d{1,6}$/, 'Choose a version.')
});

/** What was typed. */
export type PanoramaFields = z.infer<typeof panoramaSchema>;

/** Reads what the schema has found right, for a picture of that size. */
export function readPanorama(
	fields: PanoramaFields,
	{ widthPx, heightPx }: { widthPx: number; heightPx: number }
): { view: PanoramaView; points: TracePoint[]; corners: Skyline } {
	const altitudeOf = (text: string) => (text.trim() === '' ? null : typedNumber(text));
	return {
		view: {
			widthPx,
			heightPx,
			projection: fields.projection,
			marks: [
				{
					xPx: typedNumber(fields.x1),
					yPx: typedNumber(fields.y1),
					azimuthDeg: typedNumber(fields.azimuth1),
					altitudeDeg: altitudeOf(fields.altitude1)
				},
				{
					xPx: typedNumber(fields.x2),
					yPx: typedNumber(fields.y2),
					azimuthDeg: typedNumber(fields.azimuth2),
					altitudeDeg: altitudeOf(fields.altitude2)
				}
			]
		},
		points: readPoints(fields.points) ?? [],
		corners: typedRows(fields.corners) as Skyline
	};
}

/** What is wrong with a view, in a sentence; null when it has a scale. */
export function viewFault(view: PanoramaView): string | null {
	try {
		panoramaScale(view);
		return null;
	} catch (thrown) {
		if (thrown instanceof RangeError) return thrown.message;
		throw thrown;
	}
}
