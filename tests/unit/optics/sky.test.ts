import { describe, expect, it } from 'vitest';
import { createSite, findWindows, stateAt, type Site } from '../../../src/lib/optics';
import { ringDirection, ringFrame } from '../../../src/lib/optics/ring';
import { discHolds, roomInDisc, SkyMap, type SkyDisc } from '../../../src/lib/optics/sky-disc';
import { medianBound } from '../../../src/lib/optics/sky-peaks';
import { positionOfVector } from '../../../src/lib/optics/sun';
import { addDays } from '../../../src/lib/schedule';
import { casesFor, createRandom, randomPlan, seedFor } from '../../support/random';

/** Peaks of a window by looking at every instant that counts. */
function plainPeaks(site: Site, startMs: number, endMs: number) {
	const instants = [startMs, endMs];
	for (let t = Math.ceil(startMs / 300_000) * 300_000; t <= endMs; t += 300_000) instants.push(t);
	let peakShare = 0;
	let peakArcDeg = 0;
	for (const t of instants) {
		const [zone] = stateAt(site, t).zones;
		peakShare = Math.max(peakShare, zone!.share);
		const having = zone!.eyes.map((eye) => eye.arcDeg).filter((a) => a >= site.minimumArcDeg);
		having.sort((a, b) => a - b);
		const [low, high] = [(having.length - 1) >> 1, having.length >> 1];
		if (having.length > 0) peakArcDeg = Math.max(peakArcDeg, (having[low]! + having[high]!) / 2);
	}
	return { peakShare, peakArcDeg };
}

describe('what is kept of the sky', () => {
	it('gives the windows and peaks that each day gives alone', () => {
		const random = createRandom(seedFor('days of a range', 606));
		let found = 0;
		for (let k = 0; k < casesFor(20); k++) {
			const plan = randomPlan(random);
			const from = addDays('2027-01-01', Math.floor(random() * 365));
			const site = createSite(plan);
			const whole = findWindows({ site, from, to: addDays(from, 9) })[0]!.windows;
			const alone = Array.from({ length: 10 }, (_, day) => {
				const date = addDays(from, day);
				return findWindows({ site: createSite(plan), from: date, to: date })[0]!.windows;
			});
			expect(whole).toEqual(alone.flat());
			for (const { startMs, endMs, peakShare, peakArcDeg } of whole.slice(0, 3)) {
				expect({ peakShare, peakArcDeg }).toEqual(plainPeaks(site, startMs, endMs));
			}
			found += whole.length;
		}
		expect(found).toBeGreaterThan(30);
	}, 600_000);

	it('lies in discs that hold their cells, down to the zenith', () => {
		const random = createRandom(seedFor('sky discs', 360));
		const map = new SkyMap<SkyDisc>((disc) => disc);
		for (let k = 0; k < casesFor(5000); k++) {
			const sun = {
				azimuthDeg: k % 50 === 0 ? 0 : random() * 360,
				altitudeDeg: k % 50 === 1 ? 90 : Math.asin(random()) * (180 / Math.PI)
			};
			let cell = map.cellOf(sun);
			for (let depth = 0; depth < 5; depth++) {
				const room = roomInDisc(cell.disc, sun);
				expect(cell.disc.depth).toBe(depth);
				expect(room).toBeGreaterThan(0);
				// As far as the room goes, and no further than the disc.
				const away = ringDirection({
					frame: ringFrame(sun),
					radiusDeg: (room * 180) / Math.PI,
					phiDeg: random() * 360
				});
				const moved = positionOfVector({ x: -away.x, y: -away.y, z: -away.z });
				expect(roomInDisc(cell.disc, moved)).toBeGreaterThan(-1e-8);
				const quarter = map.quarterOf(cell, sun);
				if (discHolds(cell.disc, quarter.disc)) {
					expect(quarter.disc.reachRad).toBeLessThan(cell.disc.reachRad);
				}
				cell = quarter;
			}
		}
	});

	it('bounds medians of numbers that are only known by their bounds', () => {
		const random = createRandom(seedFor('median bound', 11));
		for (let k = 0; k < casesFor(3000); k++) {
			const numbers = () =>
				Float64Array.from({ length: Math.floor(random() * 6) }, () =>
					Math.ceil(random() * 9)
				).sort();
			const [certain, unsure] = [numbers(), numbers()];
			const bound = medianBound(certain, unsure);
			// Every choice of the unsure, each number at its bound or a little lower.
			for (let choice = 0; choice < 2 ** unsure.length; choice++) {
				const there = [...certain, ...unsure.filter((_, i) => (choice >> i) & 1)].map(
					(n) => n - (random() < 0.3 ? random() : 0)
				);
				if (there.length === 0) continue;
				there.sort((a, b) => a - b);
				const median = (there[(there.length - 1) >> 1]! + there[there.length >> 1]!) / 2;
				expect(median).toBeLessThanOrEqual(bound);
			}
		}
	});
});
