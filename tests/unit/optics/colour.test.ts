import { describe, expect, it } from 'vitest';
import { bowRadiusDeg } from '../../../src/lib/optics';
import { bowSpectrum } from '../../../src/lib/optics/colour';
import { airyAi } from '../../../src/lib/optics/colour/airy';
import { dropLight, overSunDisc } from '../../../src/lib/optics/colour/bow-light';
import { dropClasses } from '../../../src/lib/optics/colour/drop-spread';
import { mieScattering } from '../../../src/lib/optics/colour/mie';
import { chromaticity, whitePoint } from '../../../src/lib/optics/colour/observer';
import {
	adaptWhite,
	encodeSrgb,
	hexOf,
	intoGamut,
	SRGB_WHITE,
	xyzToLinearSrgb
} from '../../../src/lib/optics/colour/srgb';
import { rainbowIntegral } from '../../support/rainbow-integral';

describe('scattering by a sphere', () => {
	it("meets Bohren and Huffman's example", () => {
		// Bohren and Huffman 1983, appendix A: m 1.55, 0.6328 um, radius 0.525 um.
		const { qExt, qSca, qBack, asymmetry, across, along } = mieScattering({
			size: (2 * Math.PI * 0.525) / 0.6328,
			index: 1.55,
			anglesDeg: [0, 9, 90, 180]
		});
		expect(qExt).toBeCloseTo(3.10543, 5);
		expect(qSca).toBeCloseTo(3.10543, 5);
		expect(qBack).toBeCloseTo(2.92534, 5);
		expect(asymmetry).toBeCloseTo(0.63314, 5);
		const s11 = across.map((s1, i) => s1 + along[i]!);
		expect(s11[1]! / s11[0]!).toBeCloseTo(0.78539, 6);
		expect(s11[2]! / s11[0]!).toBeCloseTo(0.0124601, 7);
		expect(s11[3]! / s11[0]!).toBeCloseTo(0.0383189, 7);
	});

	it.each([
		// Wiscombe, NCAR/TN-140+STR, 1979, MIEV0.
		{ index: 1.33, absorption: 1e-5, size: 1, qSca: 0.093923, asymmetry: 0.184517 },
		{ index: 1.33, absorption: 1e-5, size: 100, qSca: 2.096594, asymmetry: 0.868959 },
		{ index: 1.33, absorption: 1e-5, size: 10_000, qSca: 1.723857, asymmetry: 0.90784 }
	])("meets Wiscombe's case of size $size", ({ qSca, asymmetry, ...sphere }) => {
		const found = mieScattering({ ...sphere, anglesDeg: [] });
		expect(found.qSca).toBeCloseTo(qSca, 6);
		expect(found.asymmetry).toBeCloseTo(asymmetry, 6);
	});

	it.each([
		[10, 2.882],
		[100, 2.0944],
		[1000, 2.0139],
		[5000, 2.0086]
	])('scatters all it takes out at index 1.5, size %d', (size, qSca) => {
		const found = mieScattering({ size, index: 1.5, anglesDeg: [] });
		expect(found.qSca).toBeCloseTo(qSca, 4);
		expect(found.qExt).toBeCloseTo(found.qSca, 9);
	});

	it('refuses sizes that are none', () => {
		for (const size of [0, -1, NaN, Infinity, 1e9])
			expect(() => mieScattering({ size, index: 1.33, anglesDeg: [] })).toThrow(RangeError);
	});
});

describe("Airy's function", () => {
	it('meets its known values and zeros, and joins where the expansions meet', () => {
		// DLMF 9.2.3 and table 9.9.1; Ai(1) from Abramowitz and Stegun, table 10.11.
		expect(airyAi(0)).toBeCloseTo(0.3550280538878172, 14);
		expect(airyAi(1)).toBeCloseTo(0.13529242, 8);
		expect(airyAi(-2.338107410459767)).toBeCloseTo(0, 12);
		expect(airyAi(-6.786708090071759)).toBeCloseTo(0, 6);
		expect(airyAi(-6 - 1e-9)).toBeCloseTo(airyAi(-6 + 1e-9), 6);
		expect(airyAi(6 + 1e-9) / airyAi(6 - 1e-9)).toBeCloseTo(1, 5);
	});

	it('is the rainbow integral', () => {
		// f(z) = pi Ai(-z (pi^2/12)^(1/3)) / (3 pi / 2)^(1/3).
		for (let z = -1.5; z < 4; z += 0.25) {
			const ai = airyAi(-z * Math.cbrt(Math.PI ** 2 / 12));
			expect((Math.PI * ai) / Math.cbrt(1.5 * Math.PI)).toBeCloseTo(rainbowIntegral(z), 5);
		}
	});
});

describe('observer and screen', () => {
	it('has the white of D65 at x 0.3127, y 0.3290', () => {
		// CIE 15; so does IEC 61966-2-1.
		const { x, y } = chromaticity(whitePoint('D65'));
		expect(x).toBeCloseTo(0.3127, 4);
		expect(y).toBeCloseTo(0.329, 4);
	});

	it('has the white of D55 at x 0.3324, y 0.3474', () => {
		const { x, y } = chromaticity(whitePoint('D55'));
		expect(x).toBeCloseTo(0.3324, 3);
		expect(y).toBeCloseTo(0.3474, 3);
	});

	it('shows white as white, also the white of another light', () => {
		expect(hexOf(xyzToLinearSrgb(SRGB_WHITE))).toBe('#ffffff');
		const d55 = whitePoint('D55');
		expect(hexOf(xyzToLinearSrgb(adaptWhite(d55, SRGB_WHITE)(d55)))).toBe('#ffffff');
	});

	it('encodes as IEC 61966-2-1 says', () => {
		expect(encodeSrgb(0)).toBe(0);
		expect(encodeSrgb(1)).toBeCloseTo(1, 12);
		expect(encodeSrgb(0.0031308)).toBeCloseTo(0.04045, 5);
		expect(encodeSrgb(0.5)).toBeCloseTo(0.735357, 6);
		expect(encodeSrgb(-1)).toBe(0);
		expect(encodeSrgb(2)).toBeCloseTo(1, 12);
	});

	it('brings colours into the screen without changing their luminance', () => {
		const luminance = ({ r, g, b }: { r: number; g: number; b: number }) =>
			0.2126 * r + 0.7152 * g + 0.0722 * b;
		const colour = { r: -0.2, g: 0.7, b: 0.3 };
		const inside = intoGamut(colour);
		expect(Math.min(inside.r, inside.g, inside.b)).toBeGreaterThanOrEqual(0);
		expect(luminance(inside)).toBeCloseTo(luminance(colour), 12);
	});
});

describe('drops and sun', () => {
	it('has a spray whose volume median is the one asked for', () => {
		const classes = dropClasses(300);
		expect(classes.reduce((sum, { number }) => sum + number, 0)).toBeCloseTo(1, 12);
		const volume = classes.map(({ dropDiameterUm, number }) => ({
			log: Math.log(dropDiameterUm),
			part: number * dropDiameterUm ** 3
		}));
		const all = volume.reduce((sum, { part }) => sum + part, 0);
		const mean = volume.reduce((sum, { log, part }) => sum + (log * part) / all, 0);
		// The classes stop at 2.5 deviations about the light's middle, so a little of the largest is left out.
		expect(Math.exp(mean) / 300).toBeCloseTo(1, 1);
	});

	it("spreads a line over the sun's 0.53 degrees and loses nothing", () => {
		const line = Array.from({ length: 81 }, (_, i) => (i === 40 ? 1 : 0)).map((y) => ({
			x: y,
			y,
			z: y
		}));
		const { colours, margin } = overSunDisc(line, 0.02);
		expect(margin).toBe(14);
		expect(colours.reduce((sum, { y }) => sum + y, 0)).toBeCloseTo(1, 9);
		const lit = colours.filter(({ y }) => y > 0).length * 0.02;
		expect(lit).toBeGreaterThan(0.5);
		expect(lit).toBeLessThan(0.6);
	});
});

describe('spectrum of the bow', () => {
	it.each([30, 50, 100])("is alike by Airy and by Lorenz and Mie's sum for %d um", (um) => {
		// Lee, Appl. Opt. 37, 1506 (1998): with a real spread of drop sizes they look alike. The full sum has
		// the light of the other rays too, so it is a little whiter.
		const airy = bowSpectrum({ dropDiameterUm: um, scattering: 'airy' });
		const mie = bowSpectrum({ dropDiameterUm: um, scattering: 'mie' });
		expect(Math.abs(airy.brightestDeg - mie.brightestDeg)).toBeLessThan(um < 40 ? 0.5 : 0.2);
		expect(Math.abs(airy.vividness - mie.vividness)).toBeLessThan(0.06);
		airy.stops.forEach(({ strength }, i) => {
			expect(Math.abs(strength - mie.stops[i]!.strength)).toBeLessThan(0.25);
		});
	});

	it('has its brightest ring near the reference radius', () => {
		for (const dropDiameterUm of [50, 150, 350]) {
			const { brightestDeg } = bowSpectrum({ dropDiameterUm });
			expect(Math.abs(brightestDeg - bowRadiusDeg({ dropDiameterUm }))).toBeLessThan(0.2);
		}
	});

	it('lies further out by the full sum than by Airy for the smallest drops', () => {
		// The model: Airy is too low by about 0.8 degrees at 12 um. One drop has ripples: the mean of some.
		const anglesDeg = Array.from({ length: 301 }, (_, i) => 30 + i * 0.04);
		const peak = (scattering: 'airy' | 'mie') => {
			const sum = new Float64Array(anglesDeg.length);
			for (let um = 11; um <= 13; um += 0.05) {
				const light = dropLight({
					scattering,
					dropDiameterUm: um,
					wavelengthUm: 0.55,
					waterTemperatureC: 15,
					anglesDeg
				});
				light.forEach((part, i) => (sum[i]! += part));
			}
			return anglesDeg[sum.indexOf(Math.max(...sum))]!;
		};
		const off = peak('mie') - peak('airy');
		expect(off).toBeGreaterThan(0.4);
		expect(off).toBeLessThan(1.4);
	});

	it('is vivid for large drops, pale for small ones, white for the smallest', () => {
		// The order of Minnaert's table ("Light and Colour in the Open Air", from memory).
		const grades = [1500, 500, 250, 90, 40, 10].map(
			(dropDiameterUm) => bowSpectrum({ dropDiameterUm }).vividness
		);
		for (let i = 1; i < grades.length; i++) expect(grades[i]!).toBeLessThan(grades[i - 1]!);
		expect(grades[0]!).toBeGreaterThan(0.8);
		expect(grades.at(-1)!).toBeLessThan(0.12);
	});

	it('runs from violet inside to red outside', () => {
		const { stops, innerDeg, outerDeg } = bowSpectrum({ dropDiameterUm: 1000, stopCount: 33 });
		expect(stops.map(({ offset }) => offset)).toEqual([...stops].map((_, i) => i / 32));
		expect(stops[0]!.angleDeg).toBe(innerDeg);
		expect(stops.at(-1)!.angleDeg).toBeCloseTo(outerDeg, 9);
		const channel = (hex: string, i: number) => parseInt(hex.slice(1 + 2 * i, 3 + 2 * i), 16);
		const bright = stops.filter(({ strength }) => strength > 0.1);
		const outermost = bright.at(-1)!.colour;
		expect(channel(outermost, 0)).toBe(255);
		expect(channel(outermost, 2)).toBeLessThan(60);
		const blue = stops.find(({ colour }) => channel(colour, 2) === 255 && channel(colour, 0) < 190);
		const green = stops.find(
			({ colour }) => channel(colour, 1) === 255 && channel(colour, 2) < 128
		);
		expect(blue!.angleDeg).toBeLessThan(green!.angleDeg);
		expect(green!.angleDeg).toBeLessThan(bright.at(-1)!.angleDeg);
	});

	it('is finite and within its ranges for all drops that a curtain may have', () => {
		for (const dropDiameterUm of [5, 12, 29.9, 30, 200, 3000])
			for (const waterTemperatureC of [0, 60]) {
				const { stops, vividness } = bowSpectrum({ dropDiameterUm, waterTemperatureC });
				expect(stops.length).toBe(17);
				expect(Math.max(...stops.map(({ strength }) => strength))).toBeLessThanOrEqual(1);
				expect(vividness).toBeGreaterThan(0);
				for (const { colour, onBlack, strength, angleDeg } of stops) {
					expect(colour).toMatch(/^#[0-9a-f]{6}$/);
					expect(onBlack).toMatch(/^#[0-9a-f]{6}$/);
					expect(strength >= 0 && angleDeg > 0 && angleDeg < 90).toBe(true);
				}
			}
	});

	it('is kept, and refuses what the plan would refuse', () => {
		expect(bowSpectrum({ dropDiameterUm: 350 })).toBe(bowSpectrum({ dropDiameterUm: 350 }));
		for (const dropDiameterUm of [4.9, 3001, NaN, Infinity])
			expect(() => bowSpectrum({ dropDiameterUm })).toThrow(RangeError);
		expect(() => bowSpectrum({ dropDiameterUm: 300, waterTemperatureC: 61 })).toThrow(RangeError);
		expect(() => bowSpectrum({ dropDiameterUm: 300, stopCount: 1 })).toThrow(RangeError);
		expect(() => bowSpectrum({ dropDiameterUm: 300, stopCount: 2.5 })).toThrow(RangeError);
	});
});
