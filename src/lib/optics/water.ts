import { requireWithin } from './angles';

/** Coefficients of IAPWS R9-97, equation 1 and table 1. */
const A = [
	0.244257733, 9.74634476e-3, -3.73234996e-3, 2.68678472e-4, 1.5892057e-3, 2.45934259e-3,
	0.90070492, -1.66626219e-2
] as const;
const UV_UM = 0.229202;
const IR_UM = 5.432937;
const REFERENCE_TEMPERATURE_K = 273.15;
const REFERENCE_DENSITY_KG_M3 = 1000;
const REFERENCE_WAVELENGTH_UM = 0.589;
const KELVIN_AT_ZERO_C = 273.15;

/** Water temperatures, degrees C, that a curtain may have. */
export const WATER_TEMPERATURE_RANGE_C = { least: 0, greatest: 60 } as const;

/** Wavelengths, micrometres, that the release was fitted over. */
const WAVELENGTH_RANGE_UM = { least: 0.2, greatest: 1.1 } as const;

/**
 * Density in kg/m3 of air-free water at 101.325 kPa: Kell, J. Chem. Eng. Data 20, 97 (1975),
 * equation 16.
 * @param temperatureC 0 to 60 degrees C
 * @throws RangeError outside that
 */
export function waterDensityKgM3(temperatureC: number): number {
	const t = requireWithin('temperatureC', temperatureC, WATER_TEMPERATURE_RANGE_C);
	return (
		(999.83952 +
			t *
				(16.945176 +
					t * (-7.9870401e-3 + t * (-46.170461e-6 + t * (105.56302e-9 - t * 280.54253e-12))))) /
		(1 + 16.87985e-3 * t)
	);
}

/**
 * Refractive index of water, relative to vacuum: IAPWS R9-97, "Release on the Refractive Index of
 * Ordinary Water Substance as a Function of Wavelength, Temperature and Pressure", equation 1.
 * @param wavelengthUm 0.2 to 1.1 micrometres
 * @param temperatureK 261.15 to 773.15 kelvin
 * @param densityKgM3 0 to 1060 kg/m3
 * @throws RangeError outside the ranges of the release
 */
export function refractiveIndexAtDensity({
	wavelengthUm,
	temperatureK,
	densityKgM3
}: {
	wavelengthUm: number;
	temperatureK: number;
	densityKgM3: number;
}): number {
	requireWithin('wavelengthUm', wavelengthUm, WAVELENGTH_RANGE_UM);
	requireWithin('temperatureK', temperatureK, { least: 261.15, greatest: 773.15 });
	requireWithin('densityKgM3', densityKgM3, { least: 0, greatest: 1060 });
	const t = temperatureK / REFERENCE_TEMPERATURE_K;
	const rho = densityKgM3 / REFERENCE_DENSITY_KG_M3;
	const l2 = (wavelengthUm / REFERENCE_WAVELENGTH_UM) ** 2;
	const uv2 = UV_UM ** 2;
	const ir2 = IR_UM ** 2;
	// (n^2 - 1) / (n^2 + 2) per reduced density; the resonances are in reduced wavelengths.
	const perDensity =
		A[0] +
		A[1] * rho +
		A[2] * t +
		A[3] * l2 * t +
		A[4] / l2 +
		A[5] / (l2 - uv2) +
		A[6] / (l2 - ir2) +
		A[7] * rho * rho;
	const k = perDensity * rho;
	return Math.sqrt((1 + 2 * k) / (1 - k));
}

/**
 * Refractive index, relative to vacuum, of air-free water at 101.325 kPa: IAPWS R9-97 with the density
 * of Kell 1975.
 * @param wavelengthUm 0.2 to 1.1 micrometres
 * @param temperatureC 0 to 60 degrees C
 * @throws RangeError outside those ranges
 */
export function waterRefractiveIndex({
	wavelengthUm,
	temperatureC
}: {
	wavelengthUm: number;
	temperatureC: number;
}): number {
	return refractiveIndexAtDensity({
		wavelengthUm,
		temperatureK: temperatureC + KELVIN_AT_ZERO_C,
		densityKgM3: waterDensityKgM3(temperatureC)
	});
}
