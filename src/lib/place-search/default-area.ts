import { boundingBox } from '../optics/polygon';
import type { Plan } from '../schemas/plan';

/** Left free about the zone: people have elbows, and nobody wants to stand in the mist. Metres. */
const BESIDE_ZONE_M = 1;

/** So far about the zone a curtain is sought at least, metres. */
const LEAST_REACH_M = 10;

/**
 * The free area that a search begins with: the rectangle about the plan's curtains and the zone, with a bay
 * for the zone. The bay is open to the side where the sun stands at noon: no bow is seen there.
 * @param lengthM of the curtain that is sought
 * @returns corners, metres, to the decimetre
 * @throws RangeError when the plan has no such zone
 */
export function defaultArea(plan: Plan, zoneIndex: number, lengthM: number): [number, number][] {
	const zone = plan.zones[zoneIndex];
	if (!zone) throw new RangeError(`the plan has no zone ${zoneIndex + 1}`);
	const about = boundingBox(zone.outline);
	const reachM = Math.max(LEAST_REACH_M, lengthM * 0.75);
	const all = boundingBox([
		...plan.curtains.flatMap(({ from, to }) => [from, to]),
		[about.west - reachM, about.south],
		[about.east + reachM, about.north]
	]);
	const [west, east] = [Math.floor(all.west), Math.ceil(all.east)];
	const down = (metres: number) => Math.floor((metres - BESIDE_ZONE_M) * 10) / 10;
	const up = (metres: number) => Math.ceil((metres + BESIDE_ZONE_M) * 10) / 10;
	if (plan.latitude >= 0) {
		const south = Math.floor(Math.min(all.south, about.south));
		const north = Math.ceil(Math.max(all.north, about.north + reachM));
		return [
			[west, south],
			[down(about.west), south],
			[down(about.west), up(about.north)],
			[up(about.east), up(about.north)],
			[up(about.east), south],
			[east, south],
			[east, north],
			[west, north]
		];
	}
	const south = Math.floor(Math.min(all.south, about.south - reachM));
	const north = Math.ceil(Math.max(all.north, about.north));
	return [
		[west, south],
		[east, south],
		[east, north],
		[up(about.east), north],
		[up(about.east), down(about.south)],
		[down(about.west), down(about.south)],
		[down(about.west), north],
		[west, north]
	];
}
