import { eq } from 'drizzle-orm';
import sharp from 'sharp';
import { beforeAll, expect, test } from 'vitest';
import type { PanoramaView } from '../../../src/lib/panorama/geometry.ts';
import { picture } from '../../../src/lib/server/db/schema/index.ts';
import { quarryPlan } from '../../../src/lib/server/demo/plans.ts';
import {
	changePanorama,
	demandPanoramaPicture,
	findPanorama,
	markPanorama,
	panoramaEdges,
	putSkyline
} from '../../../src/lib/server/sites/panorama.ts';
import { findPicture, readPicture } from '../../../src/lib/server/sites/pictures.ts';
import { addPlan, demandPlan } from '../../../src/lib/server/sites/plans.ts';
import { refusalOf } from '../../support/refusals.ts';
import { openShop, type Shop } from '../../support/shop.ts';

let shop: Shop;
beforeAll(async () => {
	shop = await openShop();
});

const upload = async (width: number, height: number) =>
	readPicture(
		await sharp({ create: { width, height, channels: 3, background: '#678' } })
			.jpeg()
			.toBuffer(),
		panoramaEdges
	);
const find = () => shop.asOwner((tx) => findPanorama(tx, shop.site.siteId));
const view: PanoramaView = {
	widthPx: 4096,
	heightPx: 512,
	projection: 'cylinder',
	marks: [
		{ xPx: 0, yPx: 256, azimuthDeg: 10, altitudeDeg: 0 },
		{ xPx: 2048, yPx: 256, azimuthDeg: 190, altitudeDeg: null }
	]
};

test('a panorama is kept wide, for its planners and no visitor, one at a site', async () => {
	await shop.asOwner(async (tx) => changePanorama(tx, shop.site.slug, await upload(8192, 1024)));
	const first = (await find())!;
	expect(first).toMatchObject({ widthPx: 4096, heightPx: 512, marking: null });
	await shop.asOwner((tx) => markPanorama(tx, shop.site.slug, { view, points: [] }));
	expect((await find())!.marking).toEqual({ marks: view.marks, points: [] });
	const kept = await shop.asOwner((tx) =>
		demandPanoramaPicture(tx, shop.site.slug, first.pictureId)
	);
	expect(kept.contentType).toBe('image/webp');
	expect(await shop.asVisitor((tx) => findPicture(tx, first.pictureId))).toBeNull();

	await shop.asOwner(async (tx) => changePanorama(tx, shop.site.slug, await upload(2000, 500)));
	const second = (await find())!;
	expect(second).toMatchObject({ widthPx: 2000, heightPx: 500, marking: null });
	const old = await shop.asOwner((tx) =>
		tx.sql.query.picture.findFirst({ where: eq(picture.id, first.pictureId) })
	);
	expect(old).toBeUndefined();
	const gone = shop.asOwner((tx) => demandPanoramaPicture(tx, shop.site.slug, first.pictureId));
	expect((await refusalOf(gone)).kind).toBe('not_found');
});

test('marks that tell no scale are refused with the reason', async () => {
	const wrong = { ...view, marks: [view.marks[0], { ...view.marks[1], azimuthDeg: 10 }] as const };
	const refusal = await refusalOf(
		shop.asOwner((tx) => markPanorama(tx, shop.site.slug, { view: wrong, points: [] }))
	);
	expect(refusal).toMatchObject({
		kind: 'invalid',
		message: 'The marks must have different bearings.'
	});
});

test('a traced line goes into a draft, and of a version that was live into a new one', async () => {
	const put = (version: number, corners: [number, number][]) =>
		shop.asOwner((tx) => putSkyline(tx, { slug: shop.site.slug, version, corners }));
	const bodyOf = async (version: number) =>
		(await shop.asOwner((tx) => demandPlan(tx, shop.site.siteId, version))).body;
	const draft = await shop.asOwner((tx) => addPlan(tx, shop.site.slug, quarryPlan));
	expect(
		await put(draft, [
			[330, 7],
			[350, 5],
			[20, 8]
		])
	).toBe(draft);
	expect(await bodyOf(draft)).toEqual({
		...(await bodyOf(1)),
		skyline: [
			[20, 8],
			[60, 9.5],
			[95, 4],
			[140, 3],
			[200, 2.5],
			[250, 5],
			[300, 11],
			[330, 7],
			[350, 5]
		]
	});
	const before = await bodyOf(1);
	const made = await put(1, [
		[100, 5],
		[120, 6]
	]);
	expect(made).toBe(draft + 1);
	expect(await bodyOf(1)).toEqual(before);
	expect((await bodyOf(made)).skyline).toContainEqual([120, 6]);
	expect((await refusalOf(put(draft, [[1, 1]]))).field).toBe('corners');
	expect(
		(
			await refusalOf(
				put(99, [
					[1, 1],
					[2, 2]
				])
			)
		).kind
	).toBe('not_found');
});
