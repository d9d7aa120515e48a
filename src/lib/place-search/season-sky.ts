import { RAD_PER_DEG } from '../optics/angles';
import { sunIsUp } from '../optics/instant';
import { ringFrame, type RingFrame } from '../optics/ring';
import type { Site } from '../optics/site';
import { positionOfVector, sunTracker, sunVector } from '../optics/sun';
import { localDayRange, openIntervals, type OpeningHours, type Season } from '../schedule';

/** Between two looks at the sun, milliseconds: it moves a quarter of a degree in one. */
const STEP_MS = 60_000;
const MS_PER_MINUTE = 60_000;

/** Directions of the sun with the minutes that it stands there while something could be sold. */
export interface SeasonSun {
	/** Unit vectors to the sun, three numbers each. */
	readonly directions: Float64Array;
	/** Minutes of each. */
	readonly minutes: Float64Array;
	/** All of them. */
	readonly minutesInAll: number;
}

/**
 * The sellable sun of a season: all minutes inside the opening hours of open days in which the sun stands
 * at or above the rule's altitude and above the skyline. The opening hours are looked at in pieces of a
 * minute, each in its middle.
 * @throws RangeError when the season or the hours are wrong
 */
export function seasonSun(site: Site, hours: OpeningHours, season: Season): SeasonSun {
	const range = localDayRange({ timeZone: site.clock.timeZone, ...season });
	const sunAt = sunTracker(site);
	const directions: number[] = [];
	const minutes: number[] = [];
	let minutesInAll = 0;
	for (const { startMs, endMs } of openIntervals({ clock: site.clock, hours, ...range })) {
		for (let ms = startMs; ms < endMs; ms += STEP_MS) {
			const lasts = Math.min(STEP_MS, endMs - ms);
			const sun = sunAt(ms + lasts / 2);
			if (!sunIsUp(site, sun)) continue;
			const { x, y, z } = sunVector(sun);
			directions.push(x, y, z);
			minutes.push(lasts / MS_PER_MINUTE);
			minutesInAll += lasts / MS_PER_MINUTE;
		}
	}
	return {
		directions: Float64Array.from(directions),
		minutes: Float64Array.from(minutes),
		minutesInAll
	};
}

/** A part of the sky in which the sun stands at times. */
export interface SunPart {
	/** Of the mean of its suns, each weighted with its minutes. */
	readonly frame: RingFrame;
	/** Furthest that a sun of the part is from the mean, radians. */
	readonly reachRad: number;
	readonly minutes: number;
	/** Number of the part among all of a sky, from 0. */
	readonly id: number;
}

/** The sellable sun of a season in parts of the sky, large and small. */
export interface SeasonSky {
	readonly minutesInAll: number;
	/** The large parts: together they are all the minutes. */
	readonly parts: readonly SunPart[];
	/** For each large part those that it touches, by their places in `parts`. */
	readonly neighbours: readonly (readonly number[])[];
	/** For each large part the small ones that it is made of. */
	readonly smaller: readonly (readonly SunPart[])[];
}

/** Reach of a large part, degrees: the bow is some forty in radius, a season's belt of sky some hundred wide. */
const LARGE_DEG = 3;

/** Reach of a small part, degrees: the sun moves as far in four minutes. */
const SMALL_DEG = 1;

interface PartNode {
	readonly part: SunPart;
	readonly halves: readonly [PartNode, PartNode] | null;
}

/**
 * Divides suns as a k-d tree does (Bentley, "Multidimensional binary search trees used for associative
 * searching", Communications of the ACM 18, 1975): each part by the middle of the longest side of its
 * box, until every sun of a part is within a reach of the part's mean.
 */
function divide({ directions, minutes }: SeasonSun, finestRad: number): PartNode {
	const order = Int32Array.from(minutes, (_, i) => i);
	let count = 0;
	const at = (i: number, axis: number) => directions[3 * order[i]! + axis]!;
	const make = (first: number, end: number): PartNode => {
		const mean = [0, 0, 0];
		const low = [Infinity, Infinity, Infinity];
		const high = [-Infinity, -Infinity, -Infinity];
		let sum = 0;
		for (let i = first; i < end; i++) {
			const weight = minutes[order[i]!]!;
			sum += weight;
			for (let axis = 0; axis < 3; axis++) {
				const value = at(i, axis);
				mean[axis]! += weight * value;
				if (value < low[axis]!) low[axis] = value;
				if (value > high[axis]!) high[axis] = value;
			}
		}
		const length = Math.hypot(mean[0]!, mean[1]!, mean[2]!);
		// Suns all around have no mean: any direction will do.
		const [x, y, z] = length > 0 ? (mean.map((value) => value / length) as Triple) : [0, 0, 1];
		let furthest2 = 0;
		for (let i = first; i < end; i++) {
			const chord2 = (at(i, 0) - x) ** 2 + (at(i, 1) - y) ** 2 + (at(i, 2) - z) ** 2;
			if (chord2 > furthest2) furthest2 = chord2;
		}
		const reachRad = 2 * Math.asin(Math.min(1, Math.sqrt(furthest2) / 2));
		const frame = ringFrame(positionOfVector({ x, y, z }));
		const part: SunPart = { frame, reachRad, minutes: sum, id: count++ };
		const sides = high.map((value, axis) => value - low[axis]!);
		const axis = sides.indexOf(Math.max(...sides));
		if (reachRad <= finestRad || !(sides[axis]! > 0)) return { part, halves: null };
		const middle = (low[axis]! + high[axis]!) / 2;
		let split = first;
		for (let i = first; i < end; i++) {
			if (at(i, axis) >= middle) continue;
			const swapped = order[i]!;
			order[i] = order[split]!;
			order[split++] = swapped;
		}
		// Two suns that differ in their last digit alone have no middle between them.
		if (split === first || split === end) return { part, halves: null };
		return { part, halves: [make(first, split), make(split, end)] };
	};
	return make(0, minutes.length);
}

type Triple = [number, number, number];

/** The parts under a node that are within a reach, or are not divided further. */
function partsWithin(node: PartNode, reachRad: number): PartNode[] {
	if (!node.halves || node.part.reachRad <= reachRad) return [node];
	return node.halves.flatMap((half) => partsWithin(half, reachRad));
}

function touching(parts: readonly SunPart[]): number[][] {
	return parts.map((a, i) =>
		parts.flatMap((b, j) => {
			const chord = Math.hypot(
				a.frame.sun.x - b.frame.sun.x,
				a.frame.sun.y - b.frame.sun.y,
				a.frame.sun.z - b.frame.sun.z
			);
			const apartRad = 2 * Math.asin(Math.min(1, chord / 2));
			return i !== j && apartRad <= a.reachRad + b.reachRad ? [j] : [];
		})
	);
}

/**
 * The sky of a season: its sellable sun laid into parts once, so that any geometry under it is judged by
 * summing over parts and not over days. (So are irradiations over a year: Robinson and Stone, "Irradiation
 * modelling made simple: the cumulative sky approach and its applications", PLEA 2004.)
 * @throws RangeError when the season or the hours are wrong
 */
export function seasonSky(site: Site, hours: OpeningHours, season: Season): SeasonSky {
	const sun = seasonSun(site, hours, season);
	const { minutesInAll } = sun;
	if (sun.minutes.length === 0) return { minutesInAll, parts: [], neighbours: [], smaller: [] };
	const whole = divide(sun, SMALL_DEG * RAD_PER_DEG);
	const large = partsWithin(whole, LARGE_DEG * RAD_PER_DEG);
	const parts = large.map(({ part }) => part);
	return {
		minutesInAll,
		parts,
		neighbours: touching(parts),
		smaller: large.map((node) => partsWithin(node, 0).map(({ part }) => part))
	};
}
