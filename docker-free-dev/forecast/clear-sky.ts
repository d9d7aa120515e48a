import { getPosition } from 'suncalc';

const RAD = Math.PI / 180;
const SAMPLES_AN_HOUR = 12;

/**
 * Relative optical air mass at a sun altitude in degrees above the horizon.
 * Kasten and Young, Appl. Opt. 28, 4735 (1989).
 */
export function airMass(altitudeDeg: number): number {
	return 1 / (Math.sin(altitudeDeg * RAD) + 0.50572 * (altitudeDeg + 6.07995) ** -1.6364);
}

/**
 * Direct normal irradiance under a cloudless sky, W/m². Zero once the sun is down.
 * A. B. Meinel and M. P. Meinel, "Applied Solar Energy" (1976).
 */
export function clearDirectNormal(altitudeDeg: number): number {
	if (altitudeDeg <= 0) return 0;
	return 1353 * 0.7 ** (airMass(altitudeDeg) ** 0.678);
}

/** The mean of the hour that ends at `endMs`, W/m²: the service's radiation looks back one hour. */
export function clearDirectNormalOfHour(
	endMs: number,
	latitude: number,
	longitude: number
): number {
	let sum = 0;
	for (let i = 0; i < SAMPLES_AN_HOUR; i++) {
		const at = endMs - ((i + 0.5) / SAMPLES_AN_HOUR) * 3_600_000;
		sum += clearDirectNormal(getPosition(new Date(at), latitude, longitude).altitude);
	}
	return sum / SAMPLES_AN_HOUR;
}
