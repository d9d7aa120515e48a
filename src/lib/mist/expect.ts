import { bowStrip, vividWords, type BowStrip } from '../bow-strip';
import { bowRadiusDeg, DROP_DIAMETER_RANGE_UM, WATER_TEMPERATURE_RANGE_C } from '../optics';
import { bowSpectrum } from '../optics/colour';
import { fallSpeedMPerS } from './fall';

/** What a drop size gives, for choosing nozzles. */
export interface Expectation {
	/** Volume median, micrometres. */
	dropDiameterUm: number;
	/** Of the bright ring at 550 nm, degrees: what windows are decided on. */
	radiusDeg: number;
	/** From the inner to the outer edge of the ring, degrees. */
	widthDeg: number;
	strip: BowStrip;
	/** `strong colours`. */
	colours: string;
	fallMPerS: number;
	/** How the mist hangs, in words. */
	hangs: string;
}

/** The wind that the guide reckons with, metres a second: 2 on the Beaufort scale, leaves rustle. */
export const GUIDE_WIND_M_PER_S = 2.5;

/** Sizes that the guide lays side by side, micrometres: fine fog to coarse spray. */
export const guideDiametersUm = [15, 30, 60, 120, 250, 420, 800] as const;

/** Standing or warm water between these is where Legionella grows, degrees C. */
export const WARM_WATER_C = { least: 20, greatest: 45 } as const;

function hangWords(fallMPerS: number): string {
	// The rule of thumb: slower than a tenth of a light breeze it goes where the air goes.
	if (fallMPerS < 0.1 * GUIDE_WIND_M_PER_S) return 'floats away with any breeze';
	if (fallMPerS < 0.4 * GUIDE_WIND_M_PER_S) return 'leans far over in a breeze';
	return 'falls as a curtain, wets the ground';
}

/**
 * What to expect of a drop size.
 * @returns null when the size or the temperature is outside what the optics answer for
 */
export function expectOf(dropDiameterUm: number, waterTemperatureC?: number): Expectation | null {
	const within = (value: number, { least, greatest }: { least: number; greatest: number }) =>
		value >= least && value <= greatest;
	if (!within(dropDiameterUm, DROP_DIAMETER_RANGE_UM)) return null;
	if (waterTemperatureC !== undefined && !within(waterTemperatureC, WATER_TEMPERATURE_RANGE_C)) {
		return null;
	}
	const strip = bowStrip(dropDiameterUm);
	const { innerDeg, outerDeg } = bowSpectrum({ dropDiameterUm, stopCount: 65, scattering: 'airy' });
	const fallMPerS = fallSpeedMPerS(dropDiameterUm);
	return {
		dropDiameterUm,
		radiusDeg: bowRadiusDeg({ dropDiameterUm, waterTemperatureC }),
		widthDeg: outerDeg - innerDeg,
		strip,
		colours: vividWords(strip.vividness),
		fallMPerS,
		hangs: hangWords(fallMPerS)
	};
}
