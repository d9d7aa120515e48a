import { airyAngleScaleRad, descartesBow, waveFrontConstant } from '../bow-radius';
import { DEG_PER_RAD } from '../angles';

/** Ai(0) and -Ai'(0): DLMF 9.2.3 and 9.2.4. */
const AI_0 = 0.3550280538878172;
const MINUS_AI_PRIME_0 = 0.2588194037928068;

/** Beyond this the asymptotic expansions are better than the power series. */
const SERIES_REACH = 6;

/**
 * Airy's function Ai(x): power series, DLMF 9.4.1, for |x| to 6, asymptotic expansions, DLMF 9.7.5 and
 * 9.7.9, beyond. Good to about 1e-7 of the function's size.
 */
export function airyAi(x: number): number {
	if (Math.abs(x) <= SERIES_REACH) {
		const cube = x * x * x;
		let first = 1;
		let second = x;
		let f = 1;
		let g = x;
		for (let k = 1; k < 60; k++) {
			first *= cube / ((3 * k - 1) * (3 * k));
			second *= cube / (3 * k * (3 * k + 1));
			f += first;
			g += second;
			if (Math.abs(first) + Math.abs(second) < 1e-17 * (Math.abs(f) + Math.abs(g))) break;
		}
		return AI_0 * f - MINUS_AI_PRIME_0 * g;
	}
	const size = Math.abs(x);
	const zeta = (2 / 3) * size ** 1.5;
	const root = Math.sqrt(Math.PI) * size ** 0.25;
	// u_k of DLMF 9.7.1, each over zeta^k.
	const u1 = 5 / 72 / zeta;
	const u2 = 385 / 10368 / zeta ** 2;
	const u3 = 85085 / 2239488 / zeta ** 3;
	const u4 = 37182145 / 644972544 / zeta ** 4;
	if (x > 0) return (Math.exp(-zeta) / (2 * root)) * (1 - u1 + u2 - u3 + u4);
	const phase = zeta - Math.PI / 4;
	return (Math.cos(phase) * (1 - u2 + u4) + Math.sin(phase) * (u1 - u3)) / root;
}

/** Airy's constant: the rainbow integral's argument z is -x of Ai over this. */
const Z_TO_AI = Math.cbrt(Math.PI ** 2 / 12);

/**
 * Intensity of the first bow of one drop, in a unit common to all wavelengths and diameters: Airy's
 * theory (van de Hulst, "Light Scattering by Small Particles", 1957, ch. 13), f(z)^2 with the factor
 * h^(-2/3) size^(7/3) lambda^2 that says how its height goes with the drop and the wavelength.
 *
 * @param refractiveIndex above 1, below 2
 * @param dropDiameterUm, @param wavelengthUm micrometres, above 0
 * @returns the intensity at an angle from the antisolar direction, degrees
 */
export function airyBow({
	refractiveIndex,
	dropDiameterUm,
	wavelengthUm
}: {
	refractiveIndex: number;
	dropDiameterUm: number;
	wavelengthUm: number;
}): (angleDeg: number) => number {
	const { radiusDeg } = descartesBow(refractiveIndex);
	const scaleDeg =
		airyAngleScaleRad({ refractiveIndex, dropDiameterUm, wavelengthUm }) * DEG_PER_RAD;
	const size = (Math.PI * dropDiameterUm) / wavelengthUm;
	const height =
		waveFrontConstant(refractiveIndex) ** (-2 / 3) * size ** (7 / 3) * wavelengthUm ** 2;
	return (angleDeg) => {
		const z = (radiusDeg - angleDeg) / scaleDeg;
		return height * airyAi(-z * Z_TO_AI) ** 2;
	};
}
