import { DROP_DIAMETER_RANGE_UM } from '../optics';

const WATER_KG_PER_M3 = 999;
/** Dry air at 15 degrees C and 1013.25 hPa, ISO 2533 standard atmosphere. */
const AIR_KG_PER_M3 = 1.225;
const AIR_VISCOSITY_PA_S = 1.789e-5;
const GRAVITY_M_PER_S2 = 9.80665;

/**
 * Speed at which a lone drop falls in still air, metres a second.
 *
 * The drop's weight against the drag of a sphere after Schiller and Naumann (1933): Cd = 24/Re (1 + 0.15
 * Re^0.687), good to a Reynolds number of about 1000. Above 2 mm real drops flatten and fall slower, at 3 mm
 * by a sixth. In a dense curtain drops drag the air along and fall faster: it is a guide.
 *
 * @param dropDiameterUm 5 to 3000
 * @throws RangeError outside that range
 */
export function fallSpeedMPerS(dropDiameterUm: number): number {
	const { least, greatest } = DROP_DIAMETER_RANGE_UM;
	if (!(dropDiameterUm >= least && dropDiameterUm <= greatest)) {
		throw new RangeError(`dropDiameterUm must be from ${least} to ${greatest}`);
	}
	const diameterM = dropDiameterUm * 1e-6;
	// In multiples of Re: weight = slow + faster drag, which grows with the speed, so halving finds it.
	const galileo =
		(GRAVITY_M_PER_S2 * AIR_KG_PER_M3 * (WATER_KG_PER_M3 - AIR_KG_PER_M3) * diameterM ** 3) /
		AIR_VISCOSITY_PA_S ** 2;
	let [low, high] = [0, galileo / 18];
	for (let i = 0; i < 60; i++) {
		const reynolds = (low + high) / 2;
		if (18 * reynolds * (1 + 0.15 * reynolds ** 0.687) < galileo) low = reynolds;
		else high = reynolds;
	}
	return (low * AIR_VISCOSITY_PA_S) / (AIR_KG_PER_M3 * diameterM);
}

/** How far a wind carries a drop sideways while it falls from a height, metres. */
export function driftM({
	dropDiameterUm,
	heightM,
	windMPerS
}: {
	dropDiameterUm: number;
	heightM: number;
	windMPerS: number;
}): number {
	return (windMPerS * heightM) / fallSpeedMPerS(dropDiameterUm);
}
