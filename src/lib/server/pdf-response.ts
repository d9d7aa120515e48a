import type { IssuedDocument } from './invoicing/documents';
import { documentPdf } from './invoicing/pdf';

/** A document as a download. */
export async function pdfResponse(issued: IssuedDocument): Promise<Response> {
	const pdf = await documentPdf(issued);
	return new Response(new Uint8Array(pdf), {
		headers: {
			'content-type': 'application/pdf',
			'content-disposition': `inline; filename="${issued.number}.pdf"`,
			'cache-control': 'private, no-store'
		}
	});
}
