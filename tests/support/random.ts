import type { Plan } from '../../src/lib/schemas/plan';

/** Seeded random numbers in [0, 1): Marsaglia's xorshift, J. Stat. Software 8 (14), 2003. */
export function createRandom(seed: number): () => number {
	let state = seed >>> 0 || 1;
	return () => {
		state ^= state << 13;
		state >>>= 0;
		state ^= state >>> 17;
		state ^= state << 5;
		state >>>= 0;
		return state / 2 ** 32;
	};
}

/** A plan of random curtains and walls about a small zone. */
export function randomPlan(random: () => number): Plan {
	const within = (least: number, greatest: number) => least + random() * (greatest - least);
	const count = (least: number, most: number) => Math.floor(within(least, most + 1));
	const sheet = (near: number, far: number, widest: number) => {
		const bearing = within(0, 2 * Math.PI);
		const distance = within(near, far);
		const turn = within(0, Math.PI);
		const width = within(1, widest);
		const x = distance * Math.sin(bearing);
		const y = distance * Math.cos(bearing);
		const bottom = within(-1, 1.5);
		return {
			from: [x - (width / 2) * Math.cos(turn), y - (width / 2) * Math.sin(turn)] as [
				number,
				number
			],
			to: [x + (width / 2) * Math.cos(turn), y + (width / 2) * Math.sin(turn)] as [number, number],
			bottom,
			top: bottom + within(0.5, 7)
		};
	};
	return {
		name: 'random',
		latitude: within(-70, 70),
		longitude: within(-180, 180),
		elevation: 0,
		timeZone: 'UTC',
		skyline: random() < 0.5 ? [] : [0, 60, 130, 200, 290].map((azimuth) => [azimuth, within(0, 8)]),
		curtains: Array.from({ length: count(1, 3) }, () => ({
			...sheet(2, 18, 25),
			dropDiameter: within(15, 600),
			enabled: random() < 0.9
		})),
		walls: Array.from({ length: count(0, 4) }, () => sheet(1, 25, 12)),
		zones: [
			{
				outline: [
					[within(-5, -2), within(-5, -2)],
					[within(2, 5), within(-5, -2)],
					[within(2, 5), within(2, 5)],
					[within(-5, -2), within(2, 5)]
				],
				floor: within(-0.5, 0.5),
				eyeHeights: [1.15, 1.65].slice(0, count(1, 2))
			}
		],
		rule: {
			minimumArc: within(5, 70),
			minimumShare: within(0.1, 1),
			minimumSunAltitude: within(0.5, 6)
		}
	};
}

/**
 * The seed of a test: its own, or the environment's RANDOM_SEED to look at other cases. It is printed, so
 * that a failure can be run again.
 */
export function seedFor(test: string, seed: number): number {
	const chosen = Number(process.env.RANDOM_SEED ?? seed);
	console.log(`${test}: seed ${chosen}`);
	return chosen;
}

/** How many cases a test tries: its own number, times the environment's RANDOM_TIMES. */
export function casesFor(count: number): number {
	return Math.round(count * Number(process.env.RANDOM_TIMES ?? 1));
}
