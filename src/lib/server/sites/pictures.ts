import { and, eq } from 'drizzle-orm';
import sharp from 'sharp';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { picture, site } from '../db/schema';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { demandSite } from './sites';

/** Largest upload, bytes. */
export const mostPictureBytes = 10 * 1024 * 1024;
/** Largest picture that is decoded, pixels. */
const mostPixels = 60_000_000;
const edgePx = 1600;

/**
 * Re-encodes an uploaded picture: turned as its metadata says, at most 1600 pixels on an edge, WebP,
 * without any metadata. What it claims to be does not count; what it is does.
 * @throws Refusal that names what is wrong
 */
export async function readPicture(
	upload: Uint8Array
): Promise<{ content: Buffer; widthPx: number; heightPx: number }> {
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
			.resize({ width: edgePx, height: edgePx, fit: 'inside', withoutEnlargement: true })
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
	read: { content: Buffer; widthPx: number; heightPx: number },
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

/** A picture as it is served; null when there is none of that name. */
export async function findPicture(tx: TenantTx, id: string) {
	const found = await tx.sql.query.picture.findFirst({
		where: and(eq(picture.operatorId, tx.operatorId), eq(picture.id, id))
	});
	return found ?? null;
}
