import { and, eq } from 'drizzle-orm';
import sharp from 'sharp';
import { mostPictureBytes } from '../../schemas/picture';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { picture, site } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { demandSite } from './sites';

/** Largest picture that is decoded, pixels. */
const mostPixels = 60_000_000;
/** Edges of a picture that visitors see. */
const usualEdges = { widthPx: 1600, heightPx: 1600 };

/** A picture as it is kept: WebP, without metadata. */
export interface ReadPicture {
	content: Buffer;
	widthPx: number;
	heightPx: number;
}

/**
 * Re-encodes an uploaded picture: turned as its metadata says, made to fit the edges, WebP, without any
 * metadata. What it claims to be does not count; what it is does.
 * @throws Refusal that names what is wrong
 */
export async function readPicture(
	upload: Uint8Array,
	{ widthPx: width, heightPx: height } = usualEdges
): Promise<ReadPicture> {
	if (upload.byteLength === 0) throw new Refusal('invalid', 'Choose a picture.', 'picture');
	if (upload.byteLength > mostPictureBytes) {
		throw new Refusal('invalid', 'A picture has at most 10 MB.', 'picture');
	}
	try {
		const image = sharp(upload, { limitInputPixels: mostPixels, failOn: 'error' });
		const { format } = await image.metadata();
		if (!['jpeg', 'png', 'webp', 'avif', 'heif'].includes(format)) {
			throw new Refusal('invalid', 'Use a JPEG, PNG, WebP or AVIF picture.', 'picture');
		}
		const { data, info } = await image
			.rotate()
			.resize({ width, height, fit: 'inside', withoutEnlargement: true })
			.webp({ quality: 80 })
			.toBuffer({ resolveWithObject: true });
		return { content: data, widthPx: info.width, heightPx: info.height };
	} catch (error) {
		if (error instanceof Refusal) throw error;
		const tooLarge = error instanceof Error && /pixel limit/i.test(error.message);
		throw new Refusal(
			'invalid',
			tooLarge
				? 'This picture has too many pixels: at most 60 million.'
				: 'This file is no picture that can be read. Use a JPEG, PNG, WebP or AVIF picture.',
			'picture'
		);
	}
}

/** Gives a site a picture in place of the one it had. */
export async function changePicture(
	tx: TenantTx,
	slug: string,
	read: ReadPicture,
	alt: string
): Promise<void> {
	demand(tx, 'sites.write');
	const found = await demandSite(tx, slug);
	const [made] = await tx.sql
		.insert(picture)
		.values({ operatorId: tx.operatorId, contentType: 'image/webp', ...read })
		.returning({ id: picture.id });
	if (!made) throw new Error('no picture was written');
	await tx.sql
		.update(site)
		.set({ pictureId: made.id, pictureAlt: alt })
		.where(eq(site.id, found.id));
	if (found.pictureId) await tx.sql.delete(picture).where(eq(picture.id, found.pictureId));
	await addToTrail(tx, {
		action: 'site.picture_changed',
		subject: { type: 'site', id: found.id },
		after: { widthPx: read.widthPx, heightPx: read.heightPx, alt }
	});
}

/** A site's picture as visitors see it; null when no site has one of that name. */
export async function findPicture(tx: TenantTx, id: string) {
	const [found] = await tx.sql
		.select({ picture })
		.from(picture)
		.innerJoin(site, eq(site.pictureId, picture.id))
		.where(and(eq(picture.operatorId, tx.operatorId), eq(picture.id, id)));
	return found?.picture ?? null;
}
