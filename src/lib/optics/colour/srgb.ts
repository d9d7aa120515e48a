import { whitePoint, type Xyz } from './observer';

/** Red, green and blue, linear in light, 1 each for white. */
export interface LinearRgb {
	readonly r: number;
	readonly g: number;
	readonly b: number;
}

type Matrix = readonly (readonly [number, number, number])[];

/** IEC 61966-2-1, equation 7: XYZ under D65 to linear sRGB. */
const XYZ_TO_SRGB: Matrix = [
	[3.2406, -1.5372, -0.4986],
	[-0.9689, 1.8758, 0.0415],
	[0.0557, -0.204, 1.057]
];

/** Cone responses of the Bradford adaptation (Lam 1985), as ICC.1 annex E gives them, and back. */
const XYZ_TO_CONES: Matrix = [
	[0.8951, 0.2664, -0.1614],
	[-0.7502, 1.7135, 0.0367],
	[0.0389, -0.0685, 1.0296]
];
const CONES_TO_XYZ: Matrix = [
	[0.9869929, -0.1470543, 0.1599627],
	[0.4323053, 0.5183603, 0.0492912],
	[-0.0085287, 0.0400428, 0.9684867]
];

function multiply(matrix: Matrix, [a, b, c]: readonly [number, number, number]) {
	return matrix.map((row) => row[0] * a + row[1] * b + row[2] * c) as [number, number, number];
}

/**
 * Colours as an eye sees them that takes one white for white, told for another: von Kries in the
 * Bradford cone space.
 */
export function adaptWhite(from: Xyz, to: Xyz): (colour: Xyz) => Xyz {
	const source = multiply(XYZ_TO_CONES, [from.x, from.y, from.z]);
	const target = multiply(XYZ_TO_CONES, [to.x, to.y, to.z]);
	return ({ x, y, z }) => {
		const [l, m, s] = multiply(XYZ_TO_CONES, [x, y, z]);
		const [ax, ay, az] = multiply(CONES_TO_XYZ, [
			(l * target[0]) / source[0],
			(m * target[1]) / source[1],
			(s * target[2]) / source[2]
		]);
		return { x: ax, y: ay, z: az };
	};
}

/** XYZ under D65 as linear sRGB; colours that sRGB does not hold have parts below 0 or above 1. */
export function xyzToLinearSrgb({ x, y, z }: Xyz): LinearRgb {
	const [r, g, b] = multiply(XYZ_TO_SRGB, [x, y, z]);
	return { r, g, b };
}

/** The same luminance with as much white mixed in as sRGB needs to hold the hue. */
export function intoGamut(colour: LinearRgb): LinearRgb {
	const { r, g, b } = colour;
	// Luminance by the sRGB primaries, IEC 61966-2-1.
	const grey = Math.max(0, 0.2126 * r + 0.7152 * g + 0.0722 * b);
	const least = Math.min(r, g, b);
	if (least >= 0) return colour;
	const kept = grey / (grey - least);
	const mix = (part: number) => Math.max(0, grey + kept * (part - grey));
	return { r: mix(r), g: mix(g), b: mix(b) };
}

/** One linear part, 0 to 1, as the sRGB value 0 to 1: IEC 61966-2-1, equations 9 and 10. */
export function encodeSrgb(linear: number): number {
	const part = Math.min(1, Math.max(0, linear));
	return part <= 0.0031308 ? 12.92 * part : 1.055 * part ** (1 / 2.4) - 0.055;
}

/** `#rrggbb` of a linear colour; parts outside 0 to 1 are cut off. */
export function hexOf({ r, g, b }: LinearRgb): string {
	const hex = (part: number) =>
		Math.round(255 * encodeSrgb(part))
			.toString(16)
			.padStart(2, '0');
	return `#${hex(r)}${hex(g)}${hex(b)}`;
}

/** The white that sRGB is made for. */
export const SRGB_WHITE: Xyz = whitePoint('D65');
