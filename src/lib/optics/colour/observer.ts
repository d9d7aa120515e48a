import { CIE_1931_5NM } from './cie-1931-5nm';

/** CIE 1931 tristimulus values. */
export interface Xyz {
	readonly x: number;
	readonly y: number;
	readonly z: number;
}

/** Illuminants that the table holds. */
export type Illuminant = 'D55' | 'D65';

/** What one wavelength adds to X, Y and Z under an illuminant. */
export interface WavelengthWeight {
	readonly wavelengthUm: number;
	readonly x: number;
	readonly y: number;
	readonly z: number;
}

/**
 * Weights with which the light of each wavelength makes up X, Y and Z under an illuminant, such that an
 * even white comes out with Y = 1 (CIE 15, "Colorimetry", section 7).
 * @param everyNth one row of the table in so many: 1 is 5 nm, 2 is 10 nm
 */
export function wavelengthWeights(illuminant: Illuminant, everyNth = 1): WavelengthWeight[] {
	const column = illuminant === 'D55' ? 4 : 5;
	const rows = CIE_1931_5NM.filter((_, i) => i % everyNth === 0);
	const white = rows.reduce((sum, row) => sum + row[2] * row[column], 0);
	return rows.map((row) => ({
		wavelengthUm: row[0] / 1000,
		x: (row[1] * row[column]) / white,
		y: (row[2] * row[column]) / white,
		z: (row[3] * row[column]) / white
	}));
}

/** The white of an illuminant, Y = 1. */
export function whitePoint(illuminant: Illuminant, everyNth = 1): Xyz {
	const sum = { x: 0, y: 0, z: 0 };
	for (const weight of wavelengthWeights(illuminant, everyNth)) {
		sum.x += weight.x;
		sum.y += weight.y;
		sum.z += weight.z;
	}
	return sum;
}

/** CIE 1931 chromaticity x, y; that of nothing is 0, 0. */
export function chromaticity({ x, y, z }: Xyz): { x: number; y: number } {
	const sum = x + y + z;
	return sum > 0 ? { x: x / sum, y: y / sum } : { x: 0, y: 0 };
}

/** CIE 1976 uniform chromaticity u', v' (CIE 15, section 8.1); that of nothing is 0, 0. */
export function uniformChromaticity({ x, y, z }: Xyz): { u: number; v: number } {
	const sum = x + 15 * y + 3 * z;
	return sum > 0 ? { u: (4 * x) / sum, v: (9 * y) / sum } : { u: 0, v: 0 };
}
