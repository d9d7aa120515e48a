import { error } from '@sveltejs/kit';
import { inTenant } from '$lib/server/db/transaction';
import { readDocument } from '$lib/server/invoicing/documents';
import { pdfResponse } from '$lib/server/pdf-response';
import { orderOfLink, visitorOrigin } from '$lib/server/visitor';
import type { RequestHandler } from './$types';

/** A receipt or credit note of the order, as PDF. */
export const GET: RequestHandler = async (event) => {
	const { operator, orderId } = await orderOfLink(event);
	const found = await inTenant(operator.id, visitorOrigin(event), (tx) =>
		readDocument(tx, event.params.document)
	);
	if (!found || found.orderId !== orderId) error(404, 'There is no such document.');
	return pdfResponse(found);
};
