import {
	readPlan,
	type Plan,
	type PlanZone,
	type PlanCurtain,
	type PlanWall
} from '../schemas/plan';
import { localClock, type LocalClock } from '../schedule/local-clock';
import { RAD_PER_DEG } from './angles';
import { bowRadiusDeg } from './bow-radius';
import { createHorizon, type Horizon } from './horizon';
import { latticePlaces } from './lattice';

/** An upright flat sheet in the site frame, with the directions along and across it worked out. */
export interface Sheet {
	readonly name: string;
	/** One end, metres. */
	readonly x: number;
	readonly y: number;
	/** Level unit vector from that end to the other. */
	readonly alongX: number;
	readonly alongY: number;
	/** Level unit vector across the sheet, to the left of `along`. */
	readonly acrossX: number;
	readonly acrossY: number;
	readonly widthM: number;
	readonly bottomM: number;
	readonly topM: number;
}

/** A mist curtain with its bow. */
export interface Curtain extends Sheet {
	readonly enabled: boolean;
	/** Reference radius of the bow in this curtain, degrees. */
	readonly radiusDeg: number;
	readonly cosRadius: number;
	readonly sinRadius: number;
}

/** An eye of a zone, metres in the site frame. */
export interface Eye {
	readonly x: number;
	readonly y: number;
	readonly z: number;
}

/** A zone with its eyes: for each lattice place one at every eye height. */
export interface Zone {
	readonly name: string;
	readonly eyes: readonly Eye[];
	/** Least number of eyes with the bow that makes the share reach the rule. */
	readonly leastEyes: number;
}

/** A plan that was found right, with everything worked out that no instant changes. */
export interface Site {
	readonly name: string;
	readonly latitudeDeg: number;
	readonly longitudeDeg: number;
	readonly clock: LocalClock;
	readonly horizon: Horizon;
	readonly curtains: readonly Curtain[];
	readonly walls: readonly Sheet[];
	readonly zones: readonly Zone[];
	readonly minimumArcDeg: number;
	readonly minimumShare: number;
	readonly minimumSunAltitudeDeg: number;
}

/** Works out the directions of a sheet. */
function createSheet(sheet: PlanWall, name: string): Sheet {
	const [x, y] = sheet.from;
	const dx = sheet.to[0] - x;
	const dy = sheet.to[1] - y;
	const widthM = Math.hypot(dx, dy);
	const alongX = dx / widthM;
	const alongY = dy / widthM;
	return {
		name,
		x,
		y,
		alongX,
		alongY,
		acrossX: -alongY,
		acrossY: alongX,
		widthM,
		bottomM: sheet.bottom,
		topM: sheet.top
	};
}

/** A curtain of a right plan, ready to be looked at. */
export function createCurtain(curtain: PlanCurtain, name: string): Curtain {
	const radiusDeg = bowRadiusDeg({
		dropDiameterUm: curtain.dropDiameter,
		waterTemperatureC: curtain.waterTemperature
	});
	return {
		...createSheet(curtain, name),
		enabled: curtain.enabled ?? true,
		radiusDeg,
		cosRadius: Math.cos(radiusDeg * RAD_PER_DEG),
		sinRadius: Math.sin(radiusDeg * RAD_PER_DEG)
	};
}

/**
 * The least k of n eyes whose share k / n reaches the rule. The fraction itself is compared: k / n is
 * rounded once, as the number in the plan was, so 112 of 160 reaches 0.7, which 0.7 * 160 would miss.
 */
export function leastEyesFor(minimumShare: number, eyes: number): number {
	let k = Math.max(0, Math.floor(minimumShare * eyes) - 2);
	while (k < eyes && !(k / eyes >= minimumShare)) k++;
	return k;
}

function createZone(zone: PlanZone, name: string, minimumShare: number): Zone {
	const eyes = latticePlaces(zone.outline).flatMap(({ x, y }) =>
		zone.eyeHeights.map((height) => ({ x, y, z: zone.floor + height }))
	);
	return { name, eyes, leastEyes: leastEyesFor(minimumShare, eyes.length) };
}

/**
 * Makes a site ready to be asked about any instant.
 *
 * A curtain, wall or zone without a name is called by its kind and place in the plan, from 1.
 *
 * @param plan a site plan; it is checked again, whoever made it
 * @throws RangeError naming every fault with its JSON path when the plan is wrong
 */
export function createSite(plan: Plan): Site {
	const read = readPlan(plan);
	if (!read.ok) {
		throw new RangeError(read.faults.map(({ path, message }) => `${path}: ${message}`).join('\n'));
	}
	const { rule, curtains, walls = [], zones, ...site } = read.plan;
	return {
		name: site.name ?? '',
		latitudeDeg: site.latitude,
		longitudeDeg: site.longitude,
		clock: localClock(site.timeZone),
		horizon: createHorizon(site.skyline),
		curtains: curtains.map((curtain, i) =>
			createCurtain(curtain, curtain.name ?? `Curtain ${i + 1}`)
		),
		walls: walls.map((wall, i) => createSheet(wall, wall.name ?? `Wall ${i + 1}`)),
		zones: zones.map((zone, i) =>
			createZone(zone, zone.name ?? `Zone ${i + 1}`, rule.minimumShare)
		),
		minimumArcDeg: rule.minimumArc,
		minimumShare: rule.minimumShare,
		minimumSunAltitudeDeg: rule.minimumSunAltitude
	};
}
