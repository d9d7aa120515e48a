import { getPosition } from 'suncalc';
import { bowRadiusDeg } from '../../src/lib/optics/bow-radius';
import type { Plan } from '../../src/lib/schemas/plan';

/**
 * The model written out plainly, as a twin of the engine: rays are cast one by one along the ring, seconds
 * are asked one by one. It shares the plan's shape and the bow's radius with the engine and no geometry.
 */

type Vec = [number, number, number];
interface Sheet {
	from: [number, number];
	to: [number, number];
	bottom: number;
	top: number;
}

const RAD = Math.PI / 180;

export function sunVec(azimuthDeg: number, altitudeDeg: number): Vec {
	const A = azimuthDeg * RAD;
	const h = altitudeDeg * RAD;
	return [Math.cos(h) * Math.sin(A), Math.cos(h) * Math.cos(A), Math.sin(h)];
}

const cross = (a: Vec, b: Vec): Vec => [
	a[1] * b[2] - a[2] * b[1],
	a[2] * b[0] - a[0] * b[2],
	a[0] * b[1] - a[1] * b[0]
];

/** Where the line start + t dir meets a sheet: t, or null. */
export function meets(start: Vec, dir: Vec, sheet: Sheet): number | null {
	const ex = sheet.to[0] - sheet.from[0];
	const ey = sheet.to[1] - sheet.from[1];
	const denominator = dir[0] * ey - dir[1] * ex;
	if (denominator === 0) return null;
	const rx = sheet.from[0] - start[0];
	const ry = sheet.from[1] - start[1];
	const t = (rx * ey - ry * ex) / denominator;
	const along = (rx * dir[1] - ry * dir[0]) / denominator;
	const z = start[2] + t * dir[2];
	return along >= 0 && along <= 1 && z >= sheet.bottom && z <= sheet.top ? t : null;
}

/** Whether both ends of one sheet lie in the plane of another. */
function coplanar(a: Sheet, b: Sheet): boolean {
	const ex = a.to[0] - a.from[0];
	const ey = a.to[1] - a.from[1];
	const width = Math.hypot(ex, ey);
	return [b.from, b.to].every(
		([x, y]) => Math.abs((x - a.from[0]) * ey - (y - a.from[1]) * ex) / width < 1e-9
	);
}

/** Whether an eye sees the bow at one phi in one curtain. */
export function raySees({
	plan,
	curtain,
	radiusDeg,
	sun,
	eye,
	phiDeg
}: {
	plan: Plan;
	curtain: Sheet;
	radiusDeg: number;
	sun: Vec;
	eye: Vec;
	phiDeg: number;
}): boolean {
	const a: Vec = [-sun[0], -sun[1], -sun[2]];
	const raw: Vec = [-a[2] * a[0], -a[2] * a[1], 1 - a[2] * a[2]];
	const size = Math.hypot(...raw);
	const u: Vec = [raw[0] / size, raw[1] / size, raw[2] / size];
	const v = cross(a, u);
	const c = Math.cos(radiusDeg * RAD);
	const s = Math.sin(radiusDeg * RAD);
	const cosPhi = Math.cos(phiDeg * RAD) * s;
	const sinPhi = Math.sin(phiDeg * RAD) * s;
	const d = [0, 1, 2].map((i) => a[i]! * c + u[i]! * cosPhi + v[i]! * sinPhi) as Vec;
	const t = meets(eye, d, curtain);
	if (t === null || t <= 0) return false;
	const p = [0, 1, 2].map((i) => eye[i]! + t * d[i]!) as Vec;
	for (const wall of plan.walls ?? []) {
		if (coplanar(curtain, wall)) continue;
		const hit = meets(eye, d, wall);
		if (hit !== null && hit >= 0 && hit < t) return false;
		const shade = meets(p, sun, wall);
		if (shade !== null && shade > 0) return false;
	}
	return true;
}

/** Whether an eye sees the bow at a phi, in degrees, in any enabled curtain. */
function seesAt(plan: Plan, sun: Vec, eye: Vec): (phiDeg: number) => boolean {
	const rings = plan.curtains
		.filter((curtain) => curtain.enabled ?? true)
		.map((curtain) => ({
			curtain,
			radiusDeg: bowRadiusDeg({
				dropDiameterUm: curtain.dropDiameter,
				waterTemperatureC: curtain.waterTemperature
			})
		}));
	return (phiDeg) => rings.some((ring) => raySees({ plan, ...ring, sun, eye, phiDeg }));
}

/** Arc of an eye in degrees by steps along the ring, any enabled curtain, midpoints of the steps. */
export function steppedArc(plan: Plan, sun: Vec, eye: Vec, stepDeg: number): number {
	const sees = seesAt(plan, sun, eye);
	const steps = Math.round(360 / stepDeg);
	let seen = 0;
	for (let i = 0; i < steps; i++) if (sees((i + 0.5) * stepDeg)) seen++;
	return (seen * 360) / steps;
}

/** As steppedArc, with every change between two steps narrowed down by halving: exact but for slivers. */
export function narrowedArc(plan: Plan, sun: Vec, eye: Vec, stepDeg: number): number {
	const sees = seesAt(plan, sun, eye);
	const steps = Math.round(360 / stepDeg);
	let arc = 0;
	let before = sees(0);
	for (let i = 1; i <= steps; i++) {
		const after = sees((i * 360) / steps);
		let low = ((i - 1) * 360) / steps;
		let high = (i * 360) / steps;
		if (before === after) {
			if (after) arc += high - low;
		} else {
			const [start, end] = [low, high];
			for (let k = 0; k < 40; k++) {
				const middle = (low + high) / 2;
				if (sees(middle) === before) low = middle;
				else high = middle;
			}
			arc += before ? low - start : end - high;
		}
		before = after;
	}
	return arc;
}

/** Lattice of a zone, every point of the bounding box tried. */
export function plainEyes(zone: Plan['zones'][number]): Vec[] {
	const { outline } = zone;
	const n = outline.length;
	let twice = 0;
	for (let i = 0; i < n; i++) {
		const [x1, y1] = outline[i]!;
		const [x2, y2] = outline[(i + 1) % n]!;
		twice += x1 * y2 - x2 * y1;
	}
	const xs = outline.map(([x]) => x);
	const ys = outline.map(([, y]) => y);
	const [west, east, south, north] = [
		Math.min(...xs),
		Math.max(...xs),
		Math.min(...ys),
		Math.max(...ys)
	];
	const inside = (x: number, y: number) => {
		let odd = false;
		for (let i = 0; i < n; i++) {
			const [x1, y1] = outline[i]!;
			const [x2, y2] = outline[(i + 1) % n]!;
			if (y1 > y !== y2 > y && x < x1 + ((y - y1) / (y2 - y1)) * (x2 - x1)) odd = !odd;
			const length = Math.hypot(x2 - x1, y2 - y1);
			const t = Math.min(
				1,
				Math.max(0, ((x - x1) * (x2 - x1) + (y - y1) * (y2 - y1)) / length ** 2)
			);
			if (Math.hypot(x - x1 - t * (x2 - x1), y - y1 - t * (y2 - y1)) <= 1e-9) return false;
		}
		return odd;
	};
	for (let spacing = Math.sqrt(Math.abs(twice) / 2 / 64); ; spacing /= 2) {
		const eyes: Vec[] = [];
		const rows = Math.ceil((north - south) / 2 / spacing) + 1;
		const columns = Math.ceil((east - west) / 2 / spacing) + 1;
		for (let j = -rows; j <= rows; j++)
			for (let i = -columns; i <= columns; i++) {
				const x = (west + east) / 2 + i * spacing;
				const y = (south + north) / 2 + j * spacing;
				if (inside(x, y)) for (const h of zone.eyeHeights) eyes.push([x, y, zone.floor + h]);
			}
		if (eyes.length >= 16 * zone.eyeHeights.length) return eyes;
	}
}

/** Skyline altitude in degrees by walking the list. */
export function plainSkyline(
	skyline: readonly (readonly [number, number])[],
	azimuth: number
): number {
	if (skyline.length === 0) return 0;
	const round = [
		[skyline.at(-1)![0] - 360, skyline.at(-1)![1]],
		...skyline,
		[skyline[0]![0] + 360, skyline[0]![1]]
	];
	for (let i = 0; i + 1 < round.length; i++) {
		const [a1, h1] = round[i]! as [number, number];
		const [a2, h2] = round[i + 1]! as [number, number];
		if (azimuth >= a1 && azimuth <= a2) return h1 + ((h2 - h1) * (azimuth - a1)) / (a2 - a1);
	}
	throw new Error(`azimuth ${azimuth} is not on the skyline`);
}

/** Whether a zone is open at an instant, by rays. */
export function plainOpen(
	plan: Plan,
	eyes: readonly Vec[],
	instantMs: number,
	stepDeg: number,
	arcOf = steppedArc
): boolean {
	const { azimuth, altitude } = getPosition(new Date(instantMs), plan.latitude, plan.longitude);
	if (altitude < plan.rule.minimumSunAltitude) return false;
	if (!(altitude > plainSkyline(plan.skyline, azimuth))) return false;
	const sun = sunVec(azimuth, altitude);
	const have = eyes.filter((eye) => arcOf(plan, sun, eye, stepDeg) >= plan.rule.minimumArc);
	return have.length / eyes.length >= plan.rule.minimumShare;
}

export { cross, type Vec };
