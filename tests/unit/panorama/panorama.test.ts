import { describe, expect, test } from 'vitest';
import {
	panoramaScale,
	type Direction,
	type PanoramaMark,
	type PanoramaView,
	type Projection
} from '$lib/panorama/geometry';
import { tracedDirections, withTraced, withTracePoint } from '$lib/panorama/trace';
import { skylineSchema } from '$lib/schemas/plan';
import { casesFor, createRandom, seedFor } from '../../support/random';

const RAD = Math.PI / 180;

/** Where a camera puts a direction: each projection by its definition, the other way round than the product. */
function camera({
	projection,
	centreDeg,
	fieldDeg,
	widthPx,
	levelYPx
}: {
	projection: Projection;
	centreDeg: number;
	fieldDeg: number;
	widthPx: number;
	levelYPx: number;
}) {
	return ({ azimuthDeg, altitudeDeg }: Direction) => {
		const aside = ((((azimuthDeg - centreDeg + 180) % 360) + 360) % 360) - 180;
		if (projection === 'plane') {
			const focal = widthPx / 2 / Math.tan((fieldDeg / 2) * RAD);
			// A unit vector to the direction, over its part along the camera's axis.
			const [x, y, z] = [
				Math.sin(aside * RAD) * Math.cos(altitudeDeg * RAD),
				Math.cos(aside * RAD) * Math.cos(altitudeDeg * RAD),
				Math.sin(altitudeDeg * RAD)
			];
			return { xPx: widthPx / 2 + (focal * x) / y, yPx: levelYPx - (focal * z) / y };
		}
		const perDeg = widthPx / fieldDeg;
		const xPx = widthPx / 2 + aside * perDeg;
		if (projection === 'sphere') return { xPx, yPx: levelYPx - altitudeDeg * perDeg };
		return { xPx, yPx: levelYPx - (perDeg / RAD) * Math.tan(altitudeDeg * RAD) };
	};
}

const markAt = (
	look: (direction: Direction) => { xPx: number; yPx: number },
	direction: Direction,
	knowsAltitude = true
): PanoramaMark => ({
	...look(direction),
	azimuthDeg: direction.azimuthDeg,
	altitudeDeg: knowsAltitude ? direction.altitudeDeg : null
});

describe('a picture with two known bearings', () => {
	test.each<[Projection, number]>([
		['cylinder', 170],
		['cylinder', 355],
		['sphere', 360],
		['plane', 66],
		['plane', 85]
	])('%s of %d degrees gives back every direction', (projection, fieldDeg) => {
		const seed = seedFor(`panorama ${projection} ${fieldDeg}`, 7 + fieldDeg);
		const random = createRandom(seed);
		for (let i = 0; i < casesFor(200); i++) {
			const widthPx = 1000 + random() * 3000;
			const heightPx = 800;
			const centreDeg = random() * 360;
			const levelYPx = 300 + random() * 200;
			const look = camera({ projection, centreDeg, fieldDeg, widthPx, levelYPx });
			const within = (): Direction => ({
				azimuthDeg: (((centreDeg + (random() - 0.5) * fieldDeg * 0.98) % 360) + 360) % 360,
				altitudeDeg: (random() - 0.3) * 30
			});
			const [one, other] = [within(), within()];
			if (Math.abs(look(one).xPx - look(other).xPx) < 0.05 * widthPx) continue;
			const scale = panoramaScale({
				widthPx,
				heightPx,
				projection,
				marks: [markAt(look, one), markAt(look, other, random() < 0.5)]
			});
			expect(scale.fieldDeg).toBeCloseTo(fieldDeg, 4);
			const asked = within();
			const { xPx, yPx } = look(asked);
			const found = scale.directionAt(xPx, yPx);
			const off = Math.abs(((found.azimuthDeg - asked.azimuthDeg + 540) % 360) - 180);
			expect(off).toBeLessThan(1e-4);
			expect(found.altitudeDeg).toBeCloseTo(asked.altitudeDeg, 4);
			const place = scale.placeAt(asked)!;
			expect(place.xPx).toBeCloseTo(xPx, 2);
			expect(place.yPx).toBeCloseTo(yPx, 2);
		}
	});

	const view: PanoramaView = {
		widthPx: 1800,
		heightPx: 600,
		projection: 'cylinder',
		marks: [
			{ xPx: 0, yPx: 300, azimuthDeg: 350, altitudeDeg: null },
			{ xPx: 900, yPx: 300, azimuthDeg: 80, altitudeDeg: null }
		]
	};
	const withMarks = (first: Partial<PanoramaMark>, second: Partial<PanoramaMark> = {}) => ({
		...view,
		marks: [
			{ ...view.marks[0], ...first },
			{ ...view.marks[1], ...second }
		] as const
	});

	test('of unknown heights has its level in the middle', () => {
		const scale = panoramaScale(view);
		expect(scale.directionAt(1800, 300)).toEqual({ azimuthDeg: 170, altitudeDeg: 0 });
		expect(scale.directionAt(0, 200).altitudeDeg).toBeCloseTo(
			Math.atan((100 * 90 * RAD) / 900) / RAD,
			9
		);
	});

	test('tells what is beside it', () => {
		const scale = panoramaScale(view);
		expect(scale.placeAt({ azimuthDeg: 171, altitudeDeg: 0 })).toBeNull();
		expect(scale.placeAt({ azimuthDeg: 349, altitudeDeg: 0 })).toBeNull();
		expect(scale.placeAt({ azimuthDeg: 35, altitudeDeg: 0 })!.xPx).toBeCloseTo(450, 9);
	});

	test('that is askew is set right by both heights', () => {
		const scale = panoramaScale(withMarks({ yPx: 310, altitudeDeg: 0 }, { altitudeDeg: 0 }));
		expect(scale.levelYPx(450)).toBeCloseTo(305, 9);
		expect(scale.directionAt(1800, 290).altitudeDeg).toBeCloseTo(0, 9);
	});

	test.each([
		['marks one above the other', withMarks({ xPx: 899 }), /further apart/],
		['the same bearing twice', withMarks({ azimuthDeg: 80 }), /different bearings/],
		['bearings the wrong way round', withMarks({ azimuthDeg: 90 }), /more than all round/],
		[
			'a photo wider than a lens',
			{ ...withMarks({ azimuthDeg: 290 }), projection: 'plane' },
			/No photo/
		],
		['a place that is no number', withMarks({ xPx: NaN }), /further apart/]
	] as const)('is refused with %s', (_, wrong, message) =>
		expect(() => panoramaScale(wrong as PanoramaView)).toThrow(message)
	);
});

describe('a traced line', () => {
	const scale = panoramaScale({
		widthPx: 3600,
		heightPx: 600,
		projection: 'cylinder',
		marks: [
			{ xPx: 0, yPx: 300, azimuthDeg: 300, altitudeDeg: 0 },
			{ xPx: 1800, yPx: 300, azimuthDeg: 120, altitudeDeg: 0 }
		]
	});
	const at = (xPx: number, yPx: number) => ({ xPx, yPx });

	test('goes over north and keeps what it does not reach', () => {
		const traced = tracedDirections(scale, [at(900, 200), at(0, 300), at(600, 250)]);
		expect(traced.map(({ azimuthDeg }) => azimuthDeg)).toEqual([300, 0, 30]);
		const before: [number, number][] = [
			[0, 1],
			[20, 2],
			[30, 3],
			[31, 4],
			[200, 5],
			[299.9, 6],
			[310, 7]
		];
		const skyline = withTraced(before, traced);
		expect(skyline.map(([azimuth]) => azimuth)).toEqual([0, 30, 31, 200, 299.9, 300]);
		expect(skyline[2]).toEqual([31, 4]);
		expect(skylineSchema.safeParse(skyline).success).toBe(true);
	});

	test('of more than a whole turn takes the first time round', () => {
		const round = Array.from({ length: 40 }, (_, i) => ({
			azimuthDeg: (100 + i * 10) % 360,
			altitudeDeg: i
		}));
		const skyline = withTraced([[7, 7]], round);
		expect(skyline).toHaveLength(36);
		expect(skyline.find(([azimuth]) => azimuth === 100)).toEqual([100, 0]);
		expect(skylineSchema.safeParse(skyline).success).toBe(true);
	});

	test('of fewer than two places changes nothing', () => {
		expect(withTraced([[7, 7]], [{ azimuthDeg: 1, altitudeDeg: 1 }])).toEqual([[7, 7]]);
	});

	test('drawn back over itself keeps the last', () => {
		const drawn = [at(10, 5), at(20, 6), at(30, 7)].reduce(
			(points, point) => withTracePoint(points, point, 4),
			[at(21, 99)]
		);
		expect(drawn).toEqual([at(10, 5), at(20, 6), at(30, 7)]);
	});
});
