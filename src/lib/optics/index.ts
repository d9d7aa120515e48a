/** The optics of a site: sun, water, bow, what is seen of it, and when. Pure; degrees and metres. */
export { createSite, type Curtain, type Eye, type Sheet, type Site, type Zone } from './site';
export { sunPosition, type SunPosition } from './sun';
export { waterDensityKgM3, waterRefractiveIndex } from './water';
export { bowRadiusDeg, descartesBow } from './bow-radius';
export { ringDirection, ringFrame, type RingFrame } from './ring';
export { stateAt, stateUnderSun, type EyeState, type SiteState, type ZoneState } from './instant';
export { findWindows, zoneWindows, type BowWindow, type ZoneWindows } from './windows';
