import { requireWithin } from '../angles';

/** What a sphere does to a plane wave. */
export interface MieScattering {
	/** Extinction, scattering and (radar) backscattering over the sphere's cross-section. */
	readonly qExt: number;
	readonly qSca: number;
	readonly qBack: number;
	/** Mean cosine of the scattering angle. */
	readonly asymmetry: number;
	/** |S1|^2 and |S2|^2, across and along the plane of scattering, one for each angle asked. */
	readonly across: Float64Array;
	readonly along: Float64Array;
}

/** Largest size parameter; the work grows with it. */
const MOST_SIZE = 50_000;

/**
 * Logarithmic derivative D_n of the Riccati-Bessel function psi_n at m x, n from 0 to `last`, by downward
 * recurrence (Bohren and Huffman 1983, eq. 4.89). Real and imaginary parts.
 */
function logarithmicDerivative(mxRe: number, mxIm: number, last: number) {
	const size = mxRe * mxRe + mxIm * mxIm;
	// The recurrence forgets its start once past the turning point n = |m x|, which is about
	// |m x|^(1/3) wide: beginning nearer to it spoils the fourth digit at x = 10,000.
	const turning = Math.sqrt(size);
	const start = Math.max(last, Math.ceil(turning + 8 * Math.cbrt(turning))) + 16;
	const re = new Float64Array(last + 1);
	const im = new Float64Array(last + 1);
	let dRe = 0;
	let dIm = 0;
	for (let n = start; n > 0; n--) {
		// D_(n-1) = n / mx - 1 / (D_n + n / mx)
		const aRe = (n * mxRe) / size;
		const aIm = (-n * mxIm) / size;
		const bRe = dRe + aRe;
		const bIm = dIm + aIm;
		const b2 = bRe * bRe + bIm * bIm;
		dRe = aRe - bRe / b2;
		dIm = aIm + bIm / b2;
		if (n - 1 <= last) {
			re[n - 1] = dRe;
			im[n - 1] = dIm;
		}
	}
	return { re, im };
}

/**
 * Scattering by a sphere: Lorenz-Mie theory (Bohren and Huffman, "Absorption and Scattering of Light by
 * Small Particles", 1983, ch. 4: coefficients by eq. 4.88, amplitudes by eq. 4.74).
 *
 * @param size pi D / wavelength in the medium, 1e-3 to 50,000
 * @param index refractive index against the medium, 0.1 to 10
 * @param absorption its imaginary part, 0 or more, to 10
 * @param anglesDeg scattering angles, 0 is forward, 180 back
 * @throws RangeError outside those ranges
 */
export function mieScattering({
	size,
	index,
	absorption = 0,
	anglesDeg
}: {
	size: number;
	index: number;
	absorption?: number;
	anglesDeg: readonly number[];
}): MieScattering {
	const x = requireWithin('size', size, { least: 1e-3, greatest: MOST_SIZE });
	requireWithin('index', index, { least: 0.1, greatest: 10 });
	requireWithin('absorption', absorption, { least: 0, greatest: 10 });
	// Wiscombe's number of terms, Appl. Opt. 19, 1505 (1980).
	const last = Math.ceil(x + 4.05 * Math.cbrt(x) + 2);
	const d = logarithmicDerivative(index * x, absorption * x, last);
	const m2 = index * index + absorption * absorption;

	const count = anglesDeg.length;
	const cosines = Float64Array.from(anglesDeg, (angle) => Math.cos((angle * Math.PI) / 180));
	const [s1Re, s1Im, s2Re, s2Im, pi0] = Array.from({ length: 5 }, () => new Float64Array(count));
	const pi1 = new Float64Array(count).fill(1);

	let psi0 = Math.cos(x);
	let psi1 = Math.sin(x);
	let chi0 = -Math.sin(x);
	let chi1 = Math.cos(x);
	let [qSca, qExt, cross, backRe, backIm] = [0, 0, 0, 0, 0];
	let [aRe0, aIm0, bRe0, bIm0] = [0, 0, 0, 0];
	for (let n = 1; n <= last; n++) {
		const psi = ((2 * n - 1) / x) * psi1 - psi0;
		const chi = ((2 * n - 1) / x) * chi1 - chi0;
		// xi = psi - i chi. Numerator (w psi - psi1), denominator (w xi - xi1), w = D/m + n/x or m D + n/x.
		const dRe = d.re[n]!;
		const dIm = d.im[n]!;
		const ratio = (wRe: number, wIm: number): [number, number] => {
			const numRe = wRe * psi - psi1;
			const numIm = wIm * psi;
			const denRe = numRe + wIm * chi;
			const denIm = numIm - wRe * chi + chi1;
			const den2 = denRe * denRe + denIm * denIm;
			return [(numRe * denRe + numIm * denIm) / den2, (numIm * denRe - numRe * denIm) / den2];
		};
		const [aRe, aIm] = ratio(
			(dRe * index + dIm * absorption) / m2 + n / x,
			(dIm * index - dRe * absorption) / m2
		);
		const [bRe, bIm] = ratio(
			dRe * index - dIm * absorption + n / x,
			dRe * absorption + dIm * index
		);

		qSca += (2 * n + 1) * (aRe * aRe + aIm * aIm + bRe * bRe + bIm * bIm);
		qExt += (2 * n + 1) * (aRe + bRe);
		const sign = n % 2 === 0 ? 1 : -1;
		backRe += (2 * n + 1) * sign * (aRe - bRe);
		backIm += (2 * n + 1) * sign * (aIm - bIm);
		cross += ((2 * n + 1) / (n * (n + 1))) * (aRe * bRe + aIm * bIm);
		if (n > 1) {
			const before = n - 1;
			cross +=
				((before * (before + 2)) / (before + 1)) *
				(aRe0 * aRe + aIm0 * aIm + bRe0 * bRe + bIm0 * bIm);
		}
		[aRe0, aIm0, bRe0, bIm0] = [aRe, aIm, bRe, bIm];

		const weight = (2 * n + 1) / (n * (n + 1));
		for (let i = 0; i < count; i++) {
			const mu = cosines[i]!;
			const pi = pi1[i]!;
			const tau = n * mu * pi - (n + 1) * pi0![i]!;
			s1Re![i]! += weight * (aRe * pi + bRe * tau);
			s1Im![i]! += weight * (aIm * pi + bIm * tau);
			s2Re![i]! += weight * (aRe * tau + bRe * pi);
			s2Im![i]! += weight * (aIm * tau + bIm * pi);
			pi1[i] = ((2 * n + 1) * mu * pi - (n + 1) * pi0![i]!) / n;
			pi0![i] = pi;
		}
		[psi0, psi1] = [psi1, psi];
		[chi0, chi1] = [chi1, chi];
	}
	return {
		qExt: (2 / x ** 2) * qExt,
		qSca: (2 / x ** 2) * qSca,
		qBack: (backRe * backRe + backIm * backIm) / x ** 2,
		asymmetry: (2 * cross) / qSca,
		across: s1Re!.map((re, i) => re * re + s1Im![i]! ** 2),
		along: s2Re!.map((re, i) => re * re + s2Im![i]! ** 2)
	};
}
