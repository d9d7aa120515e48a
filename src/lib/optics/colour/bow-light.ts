import { waterRefractiveIndex } from '../water';
import { airyBow } from './airy';
import { dropClasses } from './drop-spread';
import { mieScattering } from './mie';
import { wavelengthWeights, type Xyz } from './observer';

/** How the bow's light is worked out. */
export type Scattering = 'airy' | 'mie';

/** Every second row of the observer's table, 10 nm: the bow's light is smooth in wavelength. */
const EVERY_NTH = 2;

/** Radius of the sun's disc, degrees. */
export const SUN_RADIUS_DEG = 0.265;

/**
 * Intensity of one drop's light at angles from the antisolar direction, degrees, by either theory, each in
 * a unit of its own that is common to all diameters and wavelengths.
 */
export function dropLight({
	scattering,
	dropDiameterUm,
	wavelengthUm,
	waterTemperatureC,
	anglesDeg
}: {
	scattering: Scattering;
	dropDiameterUm: number;
	wavelengthUm: number;
	waterTemperatureC: number;
	anglesDeg: readonly number[];
}): Float64Array {
	const refractiveIndex = waterRefractiveIndex({ wavelengthUm, temperatureC: waterTemperatureC });
	if (scattering === 'airy') {
		return Float64Array.from(anglesDeg, airyBow({ refractiveIndex, dropDiameterUm, wavelengthUm }));
	}
	const { across, along } = mieScattering({
		size: (Math.PI * dropDiameterUm) / wavelengthUm,
		index: refractiveIndex,
		anglesDeg: anglesDeg.map((angle) => 180 - angle)
	});
	// Bohren and Huffman 1983, eq. 3.14 and 4.77: (|S1|^2 + |S2|^2) / (2 k^2), unpolarised.
	return across.map((s1, i) => ((s1 + along[i]!) * wavelengthUm ** 2) / 2);
}

/**
 * Colour of the bow of a spray in the light of a point of a D55 sun, at angles from the antisolar
 * direction: the light of all its drops, seen by the CIE 1931 observer. In no unit: the parts count.
 */
export function sprayColours({
	scattering,
	dropDiameterUm,
	waterTemperatureC,
	anglesDeg
}: {
	scattering: Scattering;
	dropDiameterUm: number;
	waterTemperatureC: number;
	anglesDeg: readonly number[];
}): Xyz[] {
	const [x, y, z] = [0, 1, 2].map(() => new Float64Array(anglesDeg.length));
	const classes = dropClasses(dropDiameterUm);
	for (const weight of wavelengthWeights('D55', EVERY_NTH)) {
		const { wavelengthUm } = weight;
		for (const drop of classes) {
			const light = dropLight({
				scattering,
				dropDiameterUm: drop.dropDiameterUm,
				wavelengthUm,
				waterTemperatureC,
				anglesDeg
			});
			for (let i = 0; i < light.length; i++) {
				const part = light[i]! * drop.number;
				x![i]! += part * weight.x;
				y![i]! += part * weight.y;
				z![i]! += part * weight.z;
			}
		}
	}
	return anglesDeg.map((_, i) => ({ x: x![i]!, y: y![i]!, z: z![i]! }));
}

/**
 * The same colours by the whole disc of the sun, evenly bright: each is the mean over the disc, whose
 * chord at an angle off its middle is 2 sqrt(r^2 - off^2).
 * @param colours at angles even and `stepDeg` apart; those nearer to an end than the disc's radius are lost
 * @returns colours from the `margin`th to the `margin`th last
 */
export function overSunDisc(
	colours: readonly Xyz[],
	stepDeg: number
): { colours: Xyz[]; margin: number } {
	const margin = Math.ceil(SUN_RADIUS_DEG / stepDeg);
	// The chord's mean over each step, so that a disc of a few steps is still round.
	const weights = Array.from({ length: 2 * margin + 1 }, (_, i) => {
		let chord = 0;
		for (let part = -3.5; part <= 3.5; part++) {
			const off = (i - margin + part / 8) * stepDeg;
			chord += Math.sqrt(Math.max(0, SUN_RADIUS_DEG ** 2 - off * off));
		}
		return chord;
	});
	const all = weights.reduce((sum, weight) => sum + weight, 0);
	const mean = (at: number, part: keyof Xyz) =>
		weights.reduce((sum, weight, i) => sum + weight * colours[at + i - margin]![part], 0) / all;
	const blurred: Xyz[] = [];
	for (let at = margin; at < colours.length - margin; at++) {
		blurred.push({ x: mean(at, 'x'), y: mean(at, 'y'), z: mean(at, 'z') });
	}
	return { colours: blurred, margin };
}
