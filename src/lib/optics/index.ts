/**
 * The optics of a site: sun, water, bow, what is seen of it, and when. Pure, the same in the browser and
 * on the server. Angles are degrees, lengths metres, instants milliseconds since 1970 UTC.
 */
export { createSite, type Curtain, type Eye, type Sheet, type Site, type Zone } from './site';
export { sunPosition, type SunPosition } from './sun';
export { WATER_TEMPERATURE_RANGE_C, waterDensityKgM3, waterRefractiveIndex } from './water';
export { bowRadiusDeg, descartesBow, DROP_DIAMETER_RANGE_UM } from './bow-radius';
export { ringDirection, ringFrame, type RingFrame } from './ring';
export {
	stateAt,
	stateUnderSun,
	sunIsUp,
	type EyeState,
	type SiteState,
	type ZoneState
} from './instant';
export { bowTopDeg, seenArcs, type CurtainPoint, type SeenArc } from './seen-arcs';
export {
	findWindows,
	zoneSpans,
	zoneWindows,
	type BowWindow,
	type WindowSpan,
	type ZoneWindows
} from './windows';
export { buildingAltitudeDeg, withBuilding, type SkylineCorners } from './skyline';
export { createHorizon, type Horizon } from './horizon';
export { daylight } from './daylight';
export { shareOverDay, windowsInPieces, type ShareMoment, type WindowsPiece } from './series';
