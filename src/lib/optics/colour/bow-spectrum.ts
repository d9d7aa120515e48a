import { DEG_PER_RAD, requireWithin } from '../angles';
import {
	airyAngleScaleRad,
	DEFAULT_WATER_TEMPERATURE_C,
	descartesBow,
	DROP_DIAMETER_RANGE_UM
} from '../bow-radius';
import { waterRefractiveIndex } from '../water';
import { overSunDisc, sprayColours, SUN_RADIUS_DEG, type Scattering } from './bow-light';
import { uniformChromaticity, whitePoint, type Xyz } from './observer';
import { adaptWhite, hexOf, intoGamut, SRGB_WHITE, xyzToLinearSrgb, type LinearRgb } from './srgb';

/** A place across the bow's ring. */
export interface SpectrumStop {
	/** 0 at the ring's inner edge, 1 at its outer edge. */
	readonly offset: number;
	/** Angle from the antisolar direction, degrees. */
	readonly angleDeg: number;
	/** `#rrggbb`: the hue as bright as sRGB can show it. */
	readonly colour: string;
	/** Luminance against the ring's brightest place, 0 to 1: how opaque to paint the colour. */
	readonly strength: number;
	/** `#rrggbb`: colour and strength together, as seen before black. */
	readonly onBlack: string;
}

/** Colour and strength of a bow across its ring. */
export interface BowSpectrum {
	readonly stops: readonly SpectrumStop[];
	readonly innerDeg: number;
	readonly outerDeg: number;
	/** Angle of the brightest place, degrees. */
	readonly brightestDeg: number;
	/**
	 * How vivid the bow is: the distance of its colours from white in CIE 1976 u', v', mean over the ring
	 * weighted by luminance, over 0.09. 0 is a white bow; about 1 is the best that drops can do.
	 */
	readonly vividness: number;
}

/** Below this volume median diameter Airy's approximation is left for Lorenz and Mie's full sum. */
export const AIRY_LEAST_UM = 30;

/** Steps that the ring is worked out in. */
const STEPS = 128;

/** The first dark ring, DLMF table 9.9.1 over the rainbow integral's constant; and where the outer light ends. */
const FIRST_DARK_Z = 2.338107410459767 / Math.cbrt(Math.PI ** 2 / 12);
const FAINT_Z = -1.6;

/** A mean distance from white of this counts as fully vivid. */
const FULLY_VIVID = 0.09;

/** From the first dark ring inside the bow, at the violet or the green, to where the red has faded. */
function ringEdges(dropDiameterUm: number, waterTemperatureC: number) {
	const angleAt = (wavelengthUm: number, z: number) => {
		const refractiveIndex = waterRefractiveIndex({ wavelengthUm, temperatureC: waterTemperatureC });
		const scale = airyAngleScaleRad({ refractiveIndex, dropDiameterUm, wavelengthUm });
		return descartesBow(refractiveIndex).radiusDeg - z * scale * DEG_PER_RAD;
	};
	return {
		innerDeg: Math.max(
			1,
			Math.min(angleAt(0.55, FIRST_DARK_Z), angleAt(0.42, 1.5) - SUN_RADIUS_DEG)
		),
		outerDeg: Math.min(89, angleAt(0.65, FAINT_Z) + SUN_RADIUS_DEG)
	};
}

const brightest = ({ r, g, b }: LinearRgb) => Math.max(r, g, b);
const scaled = ({ r, g, b }: LinearRgb, factor: number): LinearRgb => ({
	r: r * factor,
	g: g * factor,
	b: b * factor
});

const found = new Map<string, BowSpectrum>();

/** Spectra kept, so that a drop size that is being dragged does not fill the memory. */
const MOST_KEPT = 64;

/**
 * Colour and strength of the bow across its ring, for a spray of a volume median diameter: scattering at
 * 380 to 780 nm by the drops of a log-normal spray, blurred by the sun's disc, in the light of CIE D55
 * taken for white, seen by the CIE 1931 observer, in sRGB (IEC 61966-2-1) with as much white mixed in as
 * sRGB needs. With a spread of drop sizes Airy's and Lorenz and Mie's bows look alike (Lee, Appl. Opt. 37,
 * 1506, 1998), so Airy's is taken for drops of AIRY_LEAST_UM and more.
 *
 * Kept per drop diameter, temperature and number of stops.
 *
 * @param dropDiameterUm volume median, 5 to 3000 micrometres
 * @param waterTemperatureC 0 to 60 degrees C, 15 when absent
 * @param stopCount places across the ring, 2 to 129; 17 when absent
 * @param scattering the theory; when absent the one that fits the drops
 * @throws RangeError outside those ranges
 */
export function bowSpectrum({
	dropDiameterUm,
	waterTemperatureC = DEFAULT_WATER_TEMPERATURE_C,
	stopCount = 17,
	scattering = dropDiameterUm < AIRY_LEAST_UM ? 'mie' : 'airy'
}: {
	dropDiameterUm: number;
	waterTemperatureC?: number | undefined;
	stopCount?: number;
	scattering?: Scattering;
}): BowSpectrum {
	requireWithin('dropDiameterUm', dropDiameterUm, DROP_DIAMETER_RANGE_UM);
	requireWithin('stopCount', stopCount, { least: 2, greatest: STEPS + 1 });
	if (!Number.isInteger(stopCount)) throw new RangeError('stopCount must be a whole number');
	const key = `${scattering} ${dropDiameterUm} ${waterTemperatureC} ${stopCount}`;
	let spectrum = found.get(key);
	if (!spectrum) {
		spectrum = computeSpectrum(dropDiameterUm, waterTemperatureC, stopCount, scattering);
		if (found.size >= MOST_KEPT) found.clear();
		found.set(key, spectrum);
	}
	return spectrum;
}

function computeSpectrum(
	dropDiameterUm: number,
	waterTemperatureC: number,
	stopCount: number,
	scattering: Scattering
): BowSpectrum {
	const { innerDeg, outerDeg } = ringEdges(dropDiameterUm, waterTemperatureC);
	const stepDeg = (outerDeg - innerDeg) / STEPS;
	const margin = Math.ceil(SUN_RADIUS_DEG / stepDeg);
	const anglesDeg = Array.from(
		{ length: STEPS + 1 + 2 * margin },
		(_, i) => innerDeg + (i - margin) * stepDeg
	);
	const { colours } = overSunDisc(
		sprayColours({ scattering, dropDiameterUm, waterTemperatureC, anglesDeg }),
		stepDeg
	);
	const adapt = adaptWhite(whitePoint('D55', 2), SRGB_WHITE);
	const seen = colours.map(adapt);
	const peak = seen.reduce((best, { y }, i) => (y > seen[best]!.y ? i : best), 0);
	const shown = seen.map((colour) => intoGamut(xyzToLinearSrgb(colour)));
	const whole = 1 / Math.max(...shown.map(brightest));
	const stops = Array.from({ length: stopCount }, (_, i) => {
		const at = Math.round((i * STEPS) / (stopCount - 1));
		const light = shown[at]!;
		const most = brightest(light);
		return {
			offset: at / STEPS,
			angleDeg: innerDeg + at * stepDeg,
			colour: hexOf(most > 0 ? scaled(light, 1 / most) : { r: 1, g: 1, b: 1 }),
			strength: Math.max(0, seen[at]!.y / seen[peak]!.y),
			onBlack: hexOf(scaled(light, whole))
		};
	});
	return {
		stops,
		innerDeg,
		outerDeg,
		brightestDeg: innerDeg + peak * stepDeg,
		vividness: meanDistanceFromWhite(seen) / FULLY_VIVID
	};
}

function meanDistanceFromWhite(colours: readonly Xyz[]): number {
	const white = uniformChromaticity(SRGB_WHITE);
	let sum = 0;
	let luminance = 0;
	for (const colour of colours) {
		const { u, v } = uniformChromaticity(colour);
		sum += colour.y * Math.hypot(u - white.u, v - white.v);
		luminance += colour.y;
	}
	return sum / luminance;
}
