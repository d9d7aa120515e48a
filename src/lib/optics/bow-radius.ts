import { DEG_PER_RAD, requireWithin } from './angles';
import { waterRefractiveIndex } from './water';

/** Wavelength, micrometres, of the reference radius on which windows are decided: 550 nm. */
export const REFERENCE_WAVELENGTH_UM = 0.55;

/** Water temperature, degrees C, of a curtain that names none. */
export const DEFAULT_WATER_TEMPERATURE_C = 15;

/** Drop diameters, micrometres, that a curtain may have. */
export const DROP_DIAMETER_RANGE_UM = { least: 5, greatest: 3000 } as const;

/**
 * Argument of the first maximum of the squared rainbow integral: the first zero of Ai' (1.0187930,
 * DLMF table 9.9.1) over (pi^2 / 12)^(1/3). Van de Hulst, "Light Scattering by Small Particles",
 * 1957, ch. 13.
 */
export const AIRY_FIRST_MAXIMUM = 1.018792971647471 / Math.cbrt(Math.PI ** 2 / 12);

/**
 * Angle of least deviation of the bow with one inner reflection, in degrees: the incidence, the
 * refraction and the radius from the antisolar direction. Descartes 1637; 4r - 2i is greatest where
 * cos^2 i = (n^2 - 1) / 3.
 * @param refractiveIndex above 1, below 2
 * @throws RangeError outside that
 */
export function descartesBow(refractiveIndex: number): {
	incidenceDeg: number;
	refractionDeg: number;
	radiusDeg: number;
} {
	const n = requireWithin('refractiveIndex', refractiveIndex, { least: 1.0001, greatest: 1.9999 });
	const incidence = Math.acos(Math.sqrt((n * n - 1) / 3));
	const refraction = Math.asin(Math.sin(incidence) / n);
	return {
		incidenceDeg: incidence * DEG_PER_RAD,
		refractionDeg: refraction * DEG_PER_RAD,
		radiusDeg: (4 * refraction - 2 * incidence) * DEG_PER_RAD
	};
}

/**
 * The constant h of the cubic wave front that leaves the drop: (9/4) sqrt((4 - n^2) / (n^2 - 1)^3).
 * Van de Hulst 1957, ch. 13.
 */
export function waveFrontConstant(refractiveIndex: number): number {
	const n2 =
		requireWithin('refractiveIndex', refractiveIndex, { least: 1.0001, greatest: 1.9999 }) ** 2;
	return 2.25 * Math.sqrt((4 - n2) / (n2 - 1) ** 3);
}

/**
 * Radians of scattering angle that one unit of the rainbow integral's argument spans:
 * (h pi^2 / 12)^(1/3) (pi D / wavelength)^(-2/3), with h the wave front constant over pi^2 / 12
 * folded as in van de Hulst 1957, ch. 13.
 * @param dropDiameterUm micrometres, above 0
 * @param wavelengthUm micrometres, above 0
 */
export function airyAngleScaleRad({
	refractiveIndex,
	dropDiameterUm,
	wavelengthUm
}: {
	refractiveIndex: number;
	dropDiameterUm: number;
	wavelengthUm: number;
}): number {
	const size = (Math.PI * dropDiameterUm) / wavelengthUm;
	return (
		Math.cbrt((waveFrontConstant(refractiveIndex) * Math.PI ** 2) / 12) * Math.pow(size, -2 / 3)
	);
}

/**
 * Radius of the bright ring about the antisolar direction, in degrees: Descartes' radius less the
 * shift of Airy's first maximum. Below about 15 micrometres Airy's approximation is too low.
 *
 * @param dropDiameterUm volume median diameter, 5 to 3000 micrometres
 * @param waterTemperatureC 0 to 60 degrees C, 15 when absent
 * @param wavelengthUm 0.2 to 1.1 micrometres, 0.55 when absent (the reference radius)
 * @throws RangeError outside those ranges
 */
export function bowRadiusDeg({
	dropDiameterUm,
	waterTemperatureC = DEFAULT_WATER_TEMPERATURE_C,
	wavelengthUm = REFERENCE_WAVELENGTH_UM
}: {
	dropDiameterUm: number;
	waterTemperatureC?: number | undefined;
	wavelengthUm?: number;
}): number {
	requireWithin('dropDiameterUm', dropDiameterUm, DROP_DIAMETER_RANGE_UM);
	const refractiveIndex = waterRefractiveIndex({ wavelengthUm, temperatureC: waterTemperatureC });
	const shift =
		AIRY_FIRST_MAXIMUM * airyAngleScaleRad({ refractiveIndex, dropDiameterUm, wavelengthUm });
	return descartesBow(refractiveIndex).radiusDeg - shift * DEG_PER_RAD;
}
