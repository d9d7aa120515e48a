import { bowSpectrum } from './optics/colour';

/** A bow's colours for bands and strips, and how vivid they are (0 white, about 1 the best that drops do). */
export interface BowStrip {
	/** `#rrggbb`, outer edge first, evenly spaced. */
	stops: string[];
	vividness: number;
}

/** Fainter than this part of the brightest place is left out. */
const LEAST_STRENGTH = 0.15;

/**
 * The colours that a visitor sees in mist of a drop size. Airy's theory at every size: where it is off,
 * under 15 micrometres, the bow is nearly white by any theory, and the full sum would take a second.
 * @param dropDiameterUm volume median, 5 to 3000
 */
export function bowStrip(dropDiameterUm: number): BowStrip {
	const { stops, vividness } = bowSpectrum({ dropDiameterUm, stopCount: 65, scattering: 'airy' });
	// The bright part of the ring: its faint edges have hues too, which nobody sees.
	const bright = stops.filter(({ strength }) => strength >= LEAST_STRENGTH);
	const step = Math.max(1, Math.floor(bright.length / 14));
	return {
		stops: bright
			.filter((_, i) => i % step === 0 || i === bright.length - 1)
			.map(({ colour }) => colour)
			.reverse(),
		vividness
	};
}

/** How strong the colours are, in words. */
export function vividWords(vividness: number): string {
	if (vividness >= 0.6) return 'strong colours';
	if (vividness >= 0.3) return 'soft colours';
	return 'pale, nearly white';
}
