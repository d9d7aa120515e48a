import { inDesk, orError } from '$lib/server/http';
import { demandPanoramaPicture } from '$lib/server/sites/panorama';
import type { RequestHandler } from './$types';

/** A site's panorama, for its planners alone. */
export const GET: RequestHandler = async (event) => {
	const { site, picture } = event.params;
	const { content, contentType } = await orError(
		inDesk(event, (tx) => demandPanoramaPicture(tx, site, picture))
	);
	return new Response(new Uint8Array(content), {
		headers: {
			'content-type': contentType,
			'content-security-policy': "default-src 'none'",
			'cache-control': 'private, max-age=31536000, immutable'
		}
	});
};
