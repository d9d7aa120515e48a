import { RAD_PER_DEG } from './angles';
import { sunVector, type SunPosition } from './sun';
import type { Vector } from './vector';

/**
 * The sky in cells of azimuth and altitude, each with a disc of suns around it. The largest cells are
 * 5.625 degrees wide and high, 64 to the circle, and every cell has four quarters.
 */
const LARGEST_CELL_DEG = 5.625;
const COLUMNS = 360 / LARGEST_CELL_DEG;

/** A disc is a little wider than its cell, so that every step through it gets somewhere. */
const DISC_OVER_CELL = 1.25;

/** Radians added to a distance for its rounding. */
const ROUNDING_RAD = 1e-9;

/** A disc of suns about the centre of a cell. */
export interface SkyDisc {
	/** Centre of the cell and of the disc. */
	readonly sun: SunPosition;
	/** Unit vector to it. */
	readonly centre: Vector;
	readonly reachRad: number;
	/** 0 for the largest cells. */
	readonly depth: number;
}

/** A cell with what is known of it. */
export interface SkyCell<Known> {
	readonly disc: SkyDisc;
	readonly known: Known;
	/** Its quarters, as far as they were asked for. */
	readonly quarters: (SkyCell<Known> | undefined)[];
}

/** Angle between two unit vectors, radians. */
function angleBetween(a: Vector, b: Vector): number {
	const x = a.x - b.x;
	const y = a.y - b.y;
	const z = a.z - b.z;
	return 2 * Math.asin(Math.min(1, Math.sqrt(x * x + y * y + z * z) / 2));
}

function discAbout(sun: SunPosition, depth: number): SkyDisc {
	const half = LARGEST_CELL_DEG / 2 ** (depth + 1);
	const centre = sunVector(sun);
	const corner = (altitude: number) =>
		sunVector({
			azimuthDeg: sun.azimuthDeg + half,
			altitudeDeg: Math.max(-90, Math.min(90, altitude))
		});
	const furthest = Math.max(
		angleBetween(centre, corner(sun.altitudeDeg - half)),
		angleBetween(centre, corner(sun.altitudeDeg + half))
	);
	return { sun, centre, reachRad: DISC_OVER_CELL * furthest, depth };
}

/** How far a sun may still move before it leaves a disc, radians; below 0 outside it. */
export function roomInDisc(disc: SkyDisc, sun: SunPosition): number {
	const azimuth = sun.azimuthDeg * RAD_PER_DEG;
	const altitude = sun.altitudeDeg * RAD_PER_DEG;
	const level = Math.cos(altitude);
	const x = level * Math.sin(azimuth) - disc.centre.x;
	const y = level * Math.cos(azimuth) - disc.centre.y;
	const z = Math.sin(altitude) - disc.centre.z;
	const chord = Math.sqrt(x * x + y * y + z * z);
	return disc.reachRad - 2 * Math.asin(Math.min(1, chord / 2)) - ROUNDING_RAD;
}

/** Whether all suns of one disc are in another. */
export function discHolds(outer: SkyDisc, inner: SkyDisc): boolean {
	const apart = angleBetween(outer.centre, inner.centre);
	return apart + inner.reachRad + ROUNDING_RAD <= outer.reachRad;
}

/** What is known all over the sky, found out as far as it is asked for, and kept. */
export class SkyMap<Known> {
	private readonly largest = new Map<number, SkyCell<Known>>();
	private readonly findOut: (disc: SkyDisc, parent: SkyCell<Known> | null) => Known;

	/** @param findOut what is known for all suns of a disc; `parent` is the cell it is a quarter of */
	constructor(findOut: (disc: SkyDisc, parent: SkyCell<Known> | null) => Known) {
		this.findOut = findOut;
	}

	private create(sun: SunPosition, depth: number, parent: SkyCell<Known> | null): SkyCell<Known> {
		const disc = discAbout(sun, depth);
		return { disc, known: this.findOut(disc, parent), quarters: [] };
	}

	/** The largest cell about a sun. */
	cellOf({ azimuthDeg, altitudeDeg }: SunPosition): SkyCell<Known> {
		const column = Math.min(COLUMNS - 1, Math.floor(azimuthDeg / LARGEST_CELL_DEG));
		const row = Math.floor((altitudeDeg + 90) / LARGEST_CELL_DEG);
		const key = row * COLUMNS + column;
		let cell = this.largest.get(key);
		if (!cell) {
			const sun = {
				azimuthDeg: (column + 0.5) * LARGEST_CELL_DEG,
				// The zenith itself would lie in a row of its own above all others.
				altitudeDeg: Math.min(90, (row + 0.5) * LARGEST_CELL_DEG - 90)
			};
			cell = this.create(sun, 0, null);
			this.largest.set(key, cell);
		}
		return cell;
	}

	/** The quarter of a cell that a sun is in. */
	quarterOf(cell: SkyCell<Known>, { azimuthDeg, altitudeDeg }: SunPosition): SkyCell<Known> {
		const { sun, depth } = cell.disc;
		const east = azimuthDeg >= sun.azimuthDeg;
		const upper = altitudeDeg >= sun.altitudeDeg;
		const place = (upper ? 2 : 0) + (east ? 1 : 0);
		let quarter = cell.quarters[place];
		if (!quarter) {
			const aside = LARGEST_CELL_DEG / 2 ** (depth + 2);
			const centre = {
				azimuthDeg: sun.azimuthDeg + (east ? aside : -aside),
				altitudeDeg: Math.min(90, sun.altitudeDeg + (upper ? aside : -aside))
			};
			quarter = this.create(centre, depth + 1, cell);
			cell.quarters[place] = quarter;
		}
		return quarter;
	}
}
