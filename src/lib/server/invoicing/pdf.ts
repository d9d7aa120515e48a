import { formatMoney } from '../../money';
import { formatDate, formatPercent } from '../../format';
import { drawPdf, paper } from '../pdf';
import type { IssuedDocument } from './documents';

const titles = { receipt: 'Receipt', invoice: 'Invoice', credit_note: 'Credit note' } as const;

const { ink, quiet, hairline } = paper;

const left = 56;
const right = 539;

/** A document as PDF, A4. The same document gives the same page at any time. */
export function documentPdf(issued: IssuedDocument): Promise<Buffer> {
	const { number, kind, seller, createdAt } = issued;
	return drawPdf(
		{ title: `${titles[kind]} ${number}`, author: seller.name, made: createdAt },
		(pdf) => {
			drawHead(pdf, issued);
			drawLines(pdf, issued);
			drawSums(pdf, issued);
		}
	);
}

function drawHead(pdf: PDFKit.PDFDocument, issued: IssuedDocument): void {
	const { seller, buyer } = issued;
	pdf.font('heavy').fontSize(20).fillColor(ink).text(titles[issued.kind], left, 56);
	pdf.font('text').fontSize(10).fillColor(quiet);
	const facts = [
		`Number ${issued.number}`,
		`Issued ${formatDate(issued.issueDate)}`,
		`For ${formatDate(issued.supplyDate)}`,
		`Order ${issued.reference}`,
		...(issued.original
			? [`Corrects ${issued.original.number} of ${formatDate(issued.original.issueDate)}`]
			: [])
	];
	pdf.text(facts.join('\n'), left, 86, { width: 230, lineGap: 2 });
	const from = [
		seller.name,
		seller.street,
		`${seller.postcode} ${seller.city}`,
		seller.country,
		...(seller.taxId ? [`Tax number ${seller.taxId}`] : []),
		seller.email
	];
	pdf.fillColor(ink).text(from.join('\n'), 310, 60, { width: right - 310, lineGap: 2 });
	pdf.fillColor(quiet).text('To', left, 180);
	pdf.fillColor(ink).text(`${buyer.name}\n${buyer.email}`, left, 194, { lineGap: 2 });
}

const columns = [
	{ at: left, width: 200, align: 'left' },
	{ at: 260, width: 40, align: 'right' },
	{ at: 304, width: 76, align: 'right' },
	{ at: 384, width: 46, align: 'right' },
	{ at: 434, width: 105, align: 'right' }
] as const;

function row(pdf: PDFKit.PDFDocument, y: number, cells: string[]): number {
	let bottom = y;
	cells.forEach((cell, i) => {
		const { at, width, align } = columns[i]!;
		pdf.text(cell, at, y, { width, align });
		bottom = Math.max(bottom, pdf.y);
	});
	return bottom;
}

function rule(pdf: PDFKit.PDFDocument, y: number): void {
	pdf.moveTo(left, y).lineTo(right, y).lineWidth(0.7).strokeColor(hairline).stroke();
}

function drawLines(pdf: PDFKit.PDFDocument, issued: IssuedDocument): void {
	const { currency } = issued;
	pdf.fontSize(9).fillColor(quiet);
	let y = row(pdf, 248, ['', 'Number', 'Net each', 'Tax', `With tax, ${currency}`]) + 6;
	rule(pdf, y);
	pdf.fillColor(ink);
	for (const line of issued.lines) {
		y += 6;
		if (y > 700) {
			pdf.addPage();
			y = 56;
		}
		y =
			row(pdf, y, [
				line.description,
				String(line.quantity),
				unitNet(line.netMinor, line.quantity, currency),
				formatPercent(line.taxPercent),
				plain(line.grossMinor, currency)
			]) + 6;
		rule(pdf, y);
	}
	pdf.y = y;
}

/** Net of one, to four decimals: the line's own net is what is exact. */
function unitNet(netMinor: number, quantity: number, currency: string): string {
	const digits = plain(100, currency).split('.')[1]?.length ?? 0;
	return (netMinor / 10 ** digits / quantity).toFixed(Math.max(4, digits));
}

const plain = (amountMinor: number, currency: string) =>
	formatMoney(amountMinor, currency).replace(` ${currency}`, '');

function drawSums(pdf: PDFKit.PDFDocument, issued: IssuedDocument): void {
	const { currency } = issued;
	const sums: [string, string][] = [['Net', plain(issued.netMinor, currency)]];
	for (const tax of issued.taxes) {
		sums.push([
			`Tax ${formatPercent(tax.percent)} of ${plain(tax.taxableMinor, currency)}`,
			plain(tax.taxMinor, currency)
		]);
	}
	let y = pdf.y + 14;
	if (y + sums.length * 16 > 740) {
		pdf.addPage();
		y = 56;
	}
	pdf.fontSize(9);
	for (const [label, amount] of sums) {
		pdf.fillColor(quiet).text(label, 260, y, { width: 170, align: 'right' });
		pdf.fillColor(ink).text(amount, 434, y, { width: 105, align: 'right' });
		y += 16;
	}
	pdf.font('heavy').fontSize(11);
	pdf.text(issued.kind === 'credit_note' ? 'Credited' : 'Paid', 260, y + 4, {
		width: 170,
		align: 'right'
	});
	pdf.text(formatMoney(issued.grossMinor, currency), 434, y + 4, { width: 105, align: 'right' });
}
