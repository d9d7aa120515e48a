import sharp from 'sharp';
import { beforeAll, expect, test } from 'vitest';
import { changePicture, findPicture, readPicture } from '../../../src/lib/server/sites/pictures.ts';
import { demandSite } from '../../../src/lib/server/sites/sites.ts';
import { refusalOf } from '../../support/refusals.ts';
import { openShop, type Shop } from '../../support/shop.ts';

let shop: Shop;
beforeAll(async () => {
	shop = await openShop();
});

const plain = (width: number, height: number) =>
	sharp({ create: { width, height, channels: 3, background: '#678' } });

test('a picture is encoded anew: smaller, turned as it says, without what it carried', async () => {
	const upload = await plain(3000, 2000)
		.jpeg()
		.withExif({ IFD0: { Copyright: 'a secret' }, IFD3: { GPSLatitude: '45/1 55/1 0/1' } })
		.withMetadata({ orientation: 6 })
		.toBuffer();
	const read = await readPicture(upload);
	expect([read.widthPx, read.heightPx]).toEqual([1067, 1600]);
	const kept = await sharp(read.content).metadata();
	expect(kept.format).toBe('webp');
	expect([kept.exif, kept.icc, kept.xmp, kept.orientation]).toEqual([
		undefined,
		undefined,
		undefined,
		undefined
	]);
});

test.each([
	['nothing', () => Promise.resolve(Buffer.alloc(0)), 'Choose a picture.'],
	['text under a picture’s name', () => Promise.resolve(Buffer.from('<svg/>')), 'no picture'],
	[
		'a drawing that could carry script',
		() =>
			Promise.resolve(
				Buffer.from('<svg xmlns="http://www.w3.org/2000/svg" width="9" height="9"/>')
			),
		'JPEG, PNG, WebP or AVIF'
	],
	[
		'half a picture',
		async () => (await plain(400, 400).jpeg().toBuffer()).subarray(0, 300),
		'can be read'
	],
	[
		'80 megapixels',
		() => plain(10_000, 8_000).png({ compressionLevel: 9 }).toBuffer(),
		'too many pixels'
	],
	['11 megabytes', () => Promise.resolve(Buffer.alloc(11 * 1024 * 1024)), 'at most 10 MB']
])('%s is refused with a clear word', async (_, make, words) => {
	const refusal = await refusalOf(readPicture(await make()));
	expect(refusal.message).toContain(words);
});

test('a new picture takes the place of the old one', async () => {
	const set = async (alt: string) => {
		const read = await readPicture(await plain(40, 30).png().toBuffer());
		await shop.asOwner((tx) => changePicture(tx, shop.site.slug, read, alt));
		return shop.asOwner((tx) => demandSite(tx, shop.site.slug));
	};
	const first = await set('Mist');
	const second = await set('More mist');
	expect(second.pictureAlt).toBe('More mist');
	expect(await shop.asVisitor((tx) => findPicture(tx, first.pictureId!))).toBeNull();
	expect(await shop.asVisitor((tx) => findPicture(tx, second.pictureId!))).toMatchObject({
		contentType: 'image/webp',
		widthPx: 40
	});
});
