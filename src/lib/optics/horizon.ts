import { DEG_PER_RAD, RAD_PER_DEG } from './angles';

/** The distant horizon of a site, ready to be asked. */
export interface Horizon {
	/** Altitude of the skyline in degrees at an azimuth in degrees, 0 to 360. */
	altitudeDegAt(azimuthDeg: number): number;
	/** Least and greatest altitude over all azimuths within `halfWidthDeg` of one. */
	boundsDeg(azimuthDeg: number, halfWidthDeg: number): { least: number; greatest: number };
}

/**
 * A skyline of [azimuth, altitude] in degrees, azimuths strictly ascending in [0, 360): linear between
 * neighbours, wrapping at 360. An empty list is a flat horizon at 0.
 */
export function createHorizon(skyline: readonly (readonly [number, number])[]): Horizon {
	if (skyline.length === 0) {
		return { altitudeDegAt: () => 0, boundsDeg: () => ({ least: 0, greatest: 0 }) };
	}
	const count = skyline.length;
	const azimuths = Float64Array.from(skyline, ([azimuth]) => azimuth);
	const altitudes = Float64Array.from(skyline, ([, altitude]) => altitude);
	const whole = { least: Math.min(...altitudes), greatest: Math.max(...altitudes) };

	/** Index of the last corner at or before an azimuth in [0, 360); -1 before the first. */
	const cornerBefore = (azimuthDeg: number): number => {
		let low = 0;
		let high = count;
		while (low < high) {
			const middle = (low + high) >> 1;
			if (azimuths[middle]! <= azimuthDeg) low = middle + 1;
			else high = middle;
		}
		return low - 1;
	};
	const wrap = (azimuthDeg: number): number => {
		const turned = azimuthDeg % 360;
		return turned < 0 ? turned + 360 : turned;
	};
	const altitudeDegAt = (azimuthDeg: number): number => {
		const azimuth = wrap(azimuthDeg);
		const i = cornerBefore(azimuth);
		const before = i < 0 ? count - 1 : i;
		const after = i + 1 < count ? i + 1 : 0;
		const start = azimuths[before]! - (i < 0 ? 360 : 0);
		const end = azimuths[after]! + (i + 1 < count ? 0 : 360);
		const rise = altitudes[after]! - altitudes[before]!;
		return altitudes[before]! + (rise * (azimuth - start)) / (end - start);
	};
	const boundsDeg = (azimuthDeg: number, halfWidthDeg: number) => {
		if (!(halfWidthDeg < 180)) return whole;
		const first = wrap(azimuthDeg - halfWidthDeg);
		const atFirst = altitudeDegAt(first);
		const atLast = altitudeDegAt(azimuthDeg + halfWidthDeg);
		let least = Math.min(atFirst, atLast);
		let greatest = Math.max(atFirst, atLast);
		let i = cornerBefore(first) + 1;
		for (let passed = 0; passed < count; passed++, i++) {
			const turns = i >= count ? 360 : 0;
			const corner = i % count;
			if (azimuths[corner]! + turns > first + 2 * halfWidthDeg) break;
			least = Math.min(least, altitudes[corner]!);
			greatest = Math.max(greatest, altitudes[corner]!);
		}
		return { least, greatest };
	};
	return { altitudeDegAt, boundsDeg };
}

/**
 * The furthest that azimuth can turn, in degrees, when a direction at an altitude moves by at most
 * `reachRad` over the sphere: asin(sin reach / cos altitude); 180 when the zenith is within reach.
 */
export function azimuthReachDeg(altitudeDeg: number, reachRad: number): number {
	const level = Math.cos(altitudeDeg * RAD_PER_DEG);
	if (Math.abs(altitudeDeg) * RAD_PER_DEG + reachRad >= Math.PI / 2) return 180;
	const sine = Math.sin(reachRad) / level;
	return sine >= 1 ? 180 : Math.asin(sine) * DEG_PER_RAD;
}
