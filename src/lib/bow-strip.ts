import { bowSpectrum } from './optics/colour';

/** A colour across the bow, outer edge first, and how opaque to paint it. */
export interface StripStop {
	colour: string;
	opacity: number;
}

/** A bow's colours for bands and strips, and how vivid they are (0 white, about 1 the best that drops do). */
export interface BowStrip {
	stops: StripStop[];
	vividness: number;
}

/**
 * The colours that a visitor sees in mist of a drop size. Airy's theory at every size: where it is off,
 * under 15 micrometres, the bow is nearly white by any theory, and the full sum would take a second.
 * @param dropDiameterUm volume median, 5 to 3000
 */
export function bowStrip(dropDiameterUm: number): BowStrip {
	const { stops, vividness } = bowSpectrum({ dropDiameterUm, stopCount: 15, scattering: 'airy' });
	return {
		// The eye takes brightness by its root: so the faint edges are seen and still fade.
		stops: stops
			.map(({ colour, strength }) => ({
				colour,
				opacity: Math.round(Math.sqrt(strength) * 100) / 100
			}))
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
