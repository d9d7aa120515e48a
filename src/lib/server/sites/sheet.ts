import { bowRadiusDeg } from '../../optics';
import { formatMinutes, formatMonth } from '../../format';
import { flowWords } from '../../mist/flow';
import { monthsOf } from '../../schedule';
import type { Plan } from '../../schemas/plan';
import { drawPdf, paper } from '../pdf';
import type { PlanYear } from './plan-year';

/** What the printed sheet of a plan version says. */
export interface SiteSheet {
	operator: string;
	site: string;
	version: number;
	state: 'draft' | 'live' | 'retired';
	changedAt: Date;
	plan: Plan;
	/** Null when it is too large to be computed while somebody waits. */
	year: PlanYear | null;
}

const { ink, quiet, hairline, act } = paper;
const left = 56;
const right = 539;

const metres = (value: number) => `${Math.round(value * 100) / 100} m`;
const bearingDeg = ([x0, y0]: [number, number], [x1, y1]: [number, number]) =>
	((Math.atan2(x1 - x0, y1 - y0) * 180) / Math.PI + 360) % 360;
const lengthM = ([x0, y0]: [number, number], [x1, y1]: [number, number]) =>
	Math.hypot(x1 - x0, y1 - y0);

/** The sheet for the people who build a site: drawing, measures, season and cautions, as PDF. */
export function sheetPdf(sheet: SiteSheet): Promise<Buffer> {
	const title = `${sheet.site}, plan version ${sheet.version}`;
	return drawPdf({ title, author: sheet.operator, made: sheet.changedAt }, (pdf) => {
		pdf.font('heavy').fontSize(18).fillColor(ink).text(title, left, 56);
		const { latitude, longitude, elevation, timeZone } = sheet.plan;
		pdf.font('text').fontSize(9).fillColor(quiet);
		pdf.text(
			`${sheet.operator} · ${sheet.state} · datum ${latitude}, ${longitude} (WGS 84), ${metres(elevation)} above the sea · ${timeZone}`
		);
		drawPlan(pdf, sheet.plan);
		drawMeasures(pdf, sheet.plan);
		drawYear(pdf, sheet);
		drawCautions(pdf);
	});
}

/** The site from above, north up, in a frame of 483 by 250 points. */
function drawPlan(pdf: PDFKit.PDFDocument, plan: Plan): void {
	const points: [number, number][] = [
		[0, 0],
		...plan.curtains.flatMap(({ from, to }) => [from, to]),
		...(plan.walls ?? []).flatMap(({ from, to }) => [from, to]),
		...plan.zones.flatMap(({ outline }) => outline)
	];
	const xs = points.map(([x]) => x);
	const ys = points.map(([, y]) => y);
	const [west, east] = [Math.min(...xs), Math.max(...xs)];
	const [south, north] = [Math.min(...ys), Math.max(...ys)];
	const frame = { x: left, y: 100, width: right - left, height: 250, inset: 24 };
	const scale = Math.min(
		(frame.width - 2 * frame.inset) / Math.max(1, east - west),
		(frame.height - 2 * frame.inset) / Math.max(1, north - south)
	);
	const at = ([x, y]: [number, number]): [number, number] => [
		frame.x + frame.width / 2 + (x - (west + east) / 2) * scale,
		frame.y + frame.height / 2 - (y - (south + north) / 2) * scale
	];
	pdf.rect(frame.x, frame.y, frame.width, frame.height).lineWidth(0.7).stroke(hairline);
	for (const { outline, name } of plan.zones) {
		pdf.polygon(...outline.map(at)).fillAndStroke('#E2EBE8', quiet);
		const [x, y] = at(outline[0]!);
		pdf
			.fontSize(8)
			.fillColor(ink)
			.text(name ?? 'Zone', x + 3, y - 11, { lineBreak: false });
	}
	const line = (from: [number, number], to: [number, number], colour: string, width: number) =>
		pdf
			.moveTo(...at(from))
			.lineTo(...at(to))
			.lineWidth(width)
			.stroke(colour);
	for (const { from, to } of plan.walls ?? []) line(from, to, ink, 3);
	for (const { from, to, name } of plan.curtains) {
		line(from, to, act, 2);
		const [x, y] = at(to);
		pdf
			.fontSize(8)
			.fillColor(act)
			.text(name ?? 'Curtain', x + 4, y - 10, { lineBreak: false });
	}
	const metresLong = barMetres(scale);
	const bar = {
		x: frame.x + frame.width - 12 - metresLong * scale,
		y: frame.y + frame.height - 10
	};
	pdf
		.moveTo(bar.x, bar.y)
		.lineTo(bar.x + metresLong * scale, bar.y)
		.lineWidth(1)
		.stroke(ink);
	pdf
		.fontSize(8)
		.fillColor(ink)
		.text(metres(metresLong), bar.x, bar.y - 11, { lineBreak: false });
	pdf.text('N', frame.x + 10, frame.y + 22, { lineBreak: false });
	pdf.polygon(
		[frame.x + 13, frame.y + 6],
		[frame.x + 17, frame.y + 19],
		[frame.x + 9, frame.y + 19]
	);
	pdf.fill(ink);
	pdf.y = frame.y + frame.height;
}

/** A length of 1, 2 or 5 times a power of ten that is drawn at most 100 points long. */
function barMetres(scale: number): number {
	const wish = 100 / scale;
	const power = 10 ** Math.floor(Math.log10(wish));
	return [5, 2, 1].map((times) => times * power).find((length) => length <= wish) ?? power;
}

function table(pdf: PDFKit.PDFDocument, heads: string[], widths: number[], rows: string[][]): void {
	const draw = (cells: string[], colour: string) => {
		if (pdf.y > 760) pdf.addPage();
		const y = pdf.y + 3;
		let [x, bottom] = [left, y];
		cells.forEach((cell, i) => {
			pdf.fillColor(colour).text(cell, x, y, { width: widths[i]! - 6 });
			bottom = Math.max(bottom, pdf.y);
			x += widths[i]!;
		});
		pdf
			.moveTo(left, bottom + 2)
			.lineTo(right, bottom + 2)
			.lineWidth(0.5)
			.stroke(hairline);
		pdf.y = bottom + 2;
	};
	pdf.font('text').fontSize(8);
	draw(heads, quiet);
	for (const row of rows) draw(row, ink);
}

function heading(pdf: PDFKit.PDFDocument, text: string): void {
	if (pdf.y > 700) pdf.addPage();
	pdf
		.font('heavy')
		.fontSize(11)
		.fillColor(ink)
		.text(text, left, pdf.y + 14);
}

function drawMeasures(pdf: PDFKit.PDFDocument, plan: Plan): void {
	const corner = ([x, y]: [number, number]) => `${x}, ${y}`;
	heading(pdf, 'Curtains');
	table(
		pdf,
		[
			'Name',
			'From x, y',
			'To x, y',
			'Length',
			'Bearing',
			'Bottom to top',
			'Drops',
			'Bow radius',
			'Flow'
		],
		[80, 56, 56, 44, 42, 70, 44, 46, 45],
		plan.curtains.map((one, i) => [
			`${one.name ?? `Curtain ${i + 1}`}${(one.enabled ?? true) ? '' : ' (off)'}`,
			corner(one.from),
			corner(one.to),
			metres(lengthM(one.from, one.to)),
			`${Math.round(bearingDeg(one.from, one.to))}°`,
			`${one.bottom} to ${metres(one.top)}`,
			`${one.dropDiameter} µm`,
			`${bowRadiusDeg({ dropDiameterUm: one.dropDiameter, waterTemperatureC: one.waterTemperature }).toFixed(2)}°`,
			one.waterFlow === undefined ? 'not given' : `${one.waterFlow} l/min`
		])
	);
	const flow = flowWords(plan);
	if (flow) pdf.fillColor(ink).text(flow, left, pdf.y + 4, { width: right - left });
	if (plan.walls && plan.walls.length > 0) {
		heading(pdf, 'Walls');
		table(
			pdf,
			['Name', 'From x, y', 'To x, y', 'Length', 'Bottom to top'],
			[120, 90, 90, 80, 103],
			plan.walls.map((one, i) => [
				one.name ?? `Wall ${i + 1}`,
				corner(one.from),
				corner(one.to),
				metres(lengthM(one.from, one.to)),
				`${one.bottom} to ${metres(one.top)}`
			])
		);
	}
	heading(pdf, 'Zones');
	table(
		pdf,
		['Name', 'Corners x, y', 'Floor', 'Eye heights'],
		[100, 233, 60, 90],
		plan.zones.map((one, i) => [
			one.name ?? `Zone ${i + 1}`,
			one.outline.map(corner).join('; '),
			metres(one.floor),
			one.eyeHeights.map(metres).join(', ')
		])
	);
}

function drawYear(pdf: PDFKit.PDFDocument, { year, plan }: SiteSheet): void {
	heading(pdf, year ? `Bow in view, ${year.year}` : 'Bow in view');
	const { minimumArc, minimumShare, minimumSunAltitude } = plan.rule;
	pdf.font('text').fontSize(8).fillColor(quiet);
	pdf.text(
		`Counted when at least ${minimumShare * 100} % of a zone sees ${minimumArc}° of arc or more and the sun stands ${minimumSunAltitude}° or higher; whatever the weather and the opening hours.`
	);
	if (!year) {
		pdf.text('The year of this plan takes long to compute: see its year sheet.');
		return;
	}
	type Windows = PlanYear['zones'][number]['windows'];
	const row = (name: string, span: string, windows: Windows) => [
		name,
		span,
		String(new Set(windows.map(({ date }) => date)).size),
		formatMinutes(windows.reduce((sum, one) => sum + one.endMs - one.startMs, 0) / 60_000),
		windows.length === 0
			? '–'
			: `${Math.round(Math.max(...windows.map(({ peakArcDeg }) => peakArcDeg)))}°`
	];
	table(
		pdf,
		['Zone', 'Month', 'Days with bow', 'Bow', 'Greatest arc'],
		[140, 90, 90, 90, 73],
		year.zones.flatMap(({ zone, windows }) => [
			...monthsOf(year.year).map((month) =>
				row(
					zone,
					formatMonth(month),
					windows.filter(({ date }) => date.startsWith(month))
				)
			),
			row(zone, 'Year', windows)
		])
	);
}

const cautions = [
	'Mist that people breathe: warm or standing water can carry Legionella, which grows from about 20 to 45 °C. Plan for disinfection, sampling and draining.',
	'Wet ground is slippery. Spray near electricity needs the right protection class.',
	'Low sun dazzles, drivers beyond the site too. Nobody should stare at the sun.',
	'Masts and curtains have wind limits of their own.',
	'Local codes and licensed practice decide. This sheet does not say that an installation is safe.'
];

function drawCautions(pdf: PDFKit.PDFDocument): void {
	heading(pdf, 'Cautions');
	pdf.font('text').fontSize(8).fillColor(ink);
	for (const caution of cautions) {
		if (pdf.y > 770) pdf.addPage();
		pdf.text(`· ${caution}`, left, pdf.y + 3, { width: right - left });
	}
}
