import { sunPosition } from './optics';

/** A point of the sun's path: degrees, azimuth from north, apparent altitude. */
export interface PathPoint {
	azimuthDeg: number;
	altitudeDeg: number;
}

const stepMinutes = 10;

/**
 * The sun's path over one day by mean solar time, midnight to midnight at the place, above -1 degree, in
 * runs that do not jump over north.
 * @param date `YYYY-MM-DD`
 */
export function sunPath(
	{ latitudeDeg, longitudeDeg }: { latitudeDeg: number; longitudeDeg: number },
	date: string
): PathPoint[][] {
	const midnightMs = Date.parse(`${date}T00:00:00Z`) - longitudeDeg * 240_000;
	const runs: PathPoint[][] = [];
	let run: PathPoint[] = [];
	const close = () => {
		if (run.length > 1) runs.push(run);
		run = [];
	};
	for (let minute = 0; minute <= 1440; minute += stepMinutes) {
		const instantMs = midnightMs + minute * 60_000;
		const { azimuthDeg, altitudeDeg } = sunPosition({ instantMs, latitudeDeg, longitudeDeg });
		const before = run.at(-1);
		if (before && Math.abs(before.azimuthDeg - azimuthDeg) > 180) close();
		if (altitudeDeg < -1) close();
		else run.push({ azimuthDeg, altitudeDeg });
	}
	close();
	return runs;
}
