import { RAD_PER_DEG } from './angles';
import { ringFrame } from './ring';
import type { Sight } from './sight';
import type { Site, Zone } from './site';
import { sunVector, type SunPosition } from './sun';
import type { Vector } from './vector';
import {
	CLOSED,
	horizonVerdict,
	OPEN,
	UNSURE,
	type ShareCount,
	type ShareCounter,
	type Verdict
} from './verdict';

/** Width and height of the largest cells, degrees. The circle holds 64 of them. */
const LARGEST_CELL_DEG = 5.625;
const COLUMNS = 360 / LARGEST_CELL_DEG;

/** Times that a cell may be quartered. Smaller ones are rarely met twice in a year. */
const DEEPEST = 4;

/** A cell answers for a disc a little wider than itself, so that every step through it gets somewhere. */
const DISC_OVER_CELL = 1.25;

/** Radians added to a distance for its rounding. */
const ROUNDING_RAD = 1e-9;

/** What is known of the zone for all suns in a disc of the sky. */
export interface SkyCell extends ShareCount {
	/** Towards the centre of the disc. */
	readonly centre: Vector;
	readonly centreSun: SunPosition;
	/** Radius of the disc. */
	readonly reachRad: number;
	/** Whether the zone is open, horizon and share together. */
	readonly verdict: Verdict;
	/** Whether the share reaches the rule. */
	readonly share: Verdict;
	readonly depth: number;
	/** Its quarters, as far as they were asked for. */
	readonly quarters: (SkyCell | undefined)[];
}

/** Angle between two unit vectors, radians. */
export function angleBetween(a: Vector, b: Vector): number {
	const x = a.x - b.x;
	const y = a.y - b.y;
	const z = a.z - b.z;
	return 2 * Math.asin(Math.min(1, Math.sqrt(x * x + y * y + z * z) / 2));
}

/**
 * What a zone's rule comes to, all over the sky, worked out as far as it is asked for.
 *
 * Whether a zone is open depends on where the sun stands and on nothing else, and in a year the sun
 * passes every part of its belt of sky many times. So what is found out for a cell of the sky is kept. A
 * cell that is neither open nor closed all over is quartered, and only its unsure eyes are asked again
 * (when the quarter's disc lies in its own: otherwise all are).
 */
export class SkyCells {
	private readonly site: Site;
	private readonly zone: Zone;
	private readonly sight: Sight;
	private readonly counter: ShareCounter;
	private readonly largest = new Map<number, SkyCell>();
	private readonly everyEye: ShareCount;
	private readonly still: Int32Array;

	constructor(site: Site, zone: Zone, sight: Sight, counter: ShareCounter) {
		this.site = site;
		this.zone = zone;
		this.sight = sight;
		this.counter = counter;
		const eyes = zone.eyes.length;
		this.everyEye = { had: 0, unsure: Int32Array.from(zone.eyes, (_, e) => e), unsureCount: eyes };
		this.still = new Int32Array(eyes);
	}

	/** What is known without looking: nothing of any eye. */
	get nothingKnown(): ShareCount & { readonly share: Verdict } {
		return { ...this.everyEye, share: UNSURE };
	}

	/** The largest cell about a sun that is certain, or the smallest there is. */
	cellOf({ azimuthDeg, altitudeDeg }: SunPosition): SkyCell {
		const column = Math.min(COLUMNS - 1, Math.floor(azimuthDeg / LARGEST_CELL_DEG));
		const row = Math.floor((altitudeDeg + 90) / LARGEST_CELL_DEG);
		const key = row * COLUMNS + column;
		let cell = this.largest.get(key);
		if (!cell) {
			cell = this.judge(
				{
					azimuthDeg: (column + 0.5) * LARGEST_CELL_DEG,
					altitudeDeg: (row + 0.5) * LARGEST_CELL_DEG - 90
				},
				null
			);
			this.largest.set(key, cell);
		}
		while (cell.verdict === UNSURE && cell.depth < DEEPEST) {
			const { centreSun, depth }: SkyCell = cell;
			const east = azimuthDeg >= centreSun.azimuthDeg ? 1 : 0;
			const upper = altitudeDeg >= centreSun.altitudeDeg ? 1 : 0;
			const quarter = 2 * upper + east;
			const aside = LARGEST_CELL_DEG / 2 ** (depth + 2);
			cell = cell.quarters[quarter] ??= this.judge(
				{
					azimuthDeg: centreSun.azimuthDeg + (east ? aside : -aside),
					altitudeDeg: centreSun.altitudeDeg + (upper ? aside : -aside)
				},
				cell
			);
		}
		return cell;
	}

	/** Judges a cell about a centre, a quarter of `parent` or one of the largest. */
	private judge(centreSun: SunPosition, parent: SkyCell | null): SkyCell {
		const depth = parent ? parent.depth + 1 : 0;
		const centre = sunVector(centreSun);
		const reachRad = DISC_OVER_CELL * cornerDistanceRad(centreSun, LARGEST_CELL_DEG / 2 ** depth);
		const base = { centre, centreSun, reachRad, depth, quarters: [] };
		const horizon = horizonVerdict(this.site, centreSun, reachRad);
		if (horizon === CLOSED) {
			return { ...this.everyEye, ...base, verdict: CLOSED, share: UNSURE };
		}
		const inherits =
			parent !== null &&
			angleBetween(parent.centre, centre) + reachRad + ROUNDING_RAD <= parent.reachRad;
		const before: ShareCount = inherits ? parent : this.everyEye;
		let share = inherits ? parent.share : UNSURE;
		if (share !== UNSURE) {
			return { ...before, ...base, verdict: share === OPEN ? horizon : CLOSED, share };
		}
		this.sight.setSun(ringFrame(centreSun), reachRad);
		share = this.counter.judge(before, this.still, false);
		if (share !== UNSURE) {
			return { ...before, ...base, verdict: share === OPEN ? horizon : CLOSED, share };
		}
		const { had, unsureCount } = this.counter;
		const unsure = this.still.slice(0, unsureCount);
		return { ...base, had, unsure, unsureCount, verdict: UNSURE, share };
	}
}

/** Furthest that a corner of a cell is from its centre, radians. */
function cornerDistanceRad({ azimuthDeg, altitudeDeg }: SunPosition, cellDeg: number): number {
	const centre = sunVector({ azimuthDeg, altitudeDeg });
	const corner = (altitude: number) =>
		sunVector({
			azimuthDeg: azimuthDeg + cellDeg / 2,
			altitudeDeg: Math.max(-90, Math.min(90, altitude))
		});
	return Math.max(
		angleBetween(centre, corner(altitudeDeg - cellDeg / 2)),
		angleBetween(centre, corner(altitudeDeg + cellDeg / 2))
	);
}

/** How far a sun may still move before it leaves a cell's disc, radians; below 0 outside it. */
export function roomInCell(cell: SkyCell, sun: SunPosition): number {
	const azimuth = sun.azimuthDeg * RAD_PER_DEG;
	const altitude = sun.altitudeDeg * RAD_PER_DEG;
	const level = Math.cos(altitude);
	const x = level * Math.sin(azimuth) - cell.centre.x;
	const y = level * Math.cos(azimuth) - cell.centre.y;
	const z = Math.sin(altitude) - cell.centre.z;
	const chord = Math.sqrt(x * x + y * y + z * z);
	return cell.reachRad - 2 * Math.asin(Math.min(1, chord / 2)) - ROUNDING_RAD;
}
