/**
 * Colour and strength of the bow: a grade that is shown, never a gate. Pure. Angles are degrees from the
 * antisolar direction, drop diameters micrometres, colours sRGB.
 */
export { bowSpectrum, type BowSpectrum, type SpectrumStop } from './bow-spectrum';
export type { Scattering } from './bow-light';
