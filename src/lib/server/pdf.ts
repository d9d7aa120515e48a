import { createRequire } from 'node:module';
import PDFDocument from 'pdfkit';

// The interface's own font is cut into one file for each script, and names may need any of them.
const require = createRequire(import.meta.url);

/** Colours of the light look, on paper. */
export const paper = { ink: '#14232A', quiet: '#4A5D64', hairline: '#D3DEDB', act: '#0E5A66' };

/**
 * Draws an A4 document with the fonts `text` and `heavy`, margins of 56 points.
 * @param made stands as the date of its making, so that the same content gives the same bytes
 */
export function drawPdf(
	{ title, author, made }: { title: string; author: string; made: Date },
	draw: (pdf: PDFKit.PDFDocument) => void
): Promise<Buffer> {
	const pdf = new PDFDocument({
		size: 'A4',
		margin: 56,
		info: { Title: title, Author: author, CreationDate: made, ModDate: made },
		lang: 'en'
	});
	const parts: Buffer[] = [];
	pdf.on('data', (part: Buffer) => parts.push(part));
	const done = new Promise<Buffer>((resolve, reject) => {
		pdf.on('end', () => resolve(Buffer.concat(parts)));
		pdf.on('error', reject);
	});
	pdf.registerFont('text', fontFile('DejaVuSans'));
	pdf.registerFont('heavy', fontFile('DejaVuSans-Bold'));
	draw(pdf);
	pdf.end();
	return done;
}

function fontFile(name: string): string {
	return require.resolve(`dejavu-fonts-ttf/ttf/${name}.ttf`);
}
