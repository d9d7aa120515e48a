import { error } from '@sveltejs/kit';
import { findPicture } from '$lib/server/sites/pictures';
import { asVisitor } from '$lib/server/visitor';
import type { RequestHandler } from './$types';

/** A site's picture. Its address changes with its content, so that it may be kept for good. */
export const GET: RequestHandler = async (event) => {
	const found = await asVisitor(event, (tx) => findPicture(tx, event.params.picture));
	if (!found) error(404, 'There is no such picture.');
	return new Response(new Uint8Array(found.content), {
		headers: {
			'content-type': found.contentType,
			'content-security-policy': "default-src 'none'",
			'cache-control': 'public, max-age=31536000, immutable'
		}
	});
};
