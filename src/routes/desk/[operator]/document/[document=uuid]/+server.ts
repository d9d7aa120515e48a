import { inDesk, orError } from '$lib/server/http';
import { demandDocument } from '$lib/server/invoicing/documents';
import { pdfResponse } from '$lib/server/pdf-response';
import type { RequestHandler } from './$types';

/** A document of the operator, as PDF. */
export const GET: RequestHandler = async (event) =>
	pdfResponse(await orError(inDesk(event, (tx) => demandDocument(tx, event.params.document))));
