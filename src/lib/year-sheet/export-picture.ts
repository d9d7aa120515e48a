import { formatDate, formatMonthShort } from '../format';
import { CLOSED_OPACITY, type ColouredPath, type SheetGround } from './sheet';

/** What a picture of a sheet shows. */
export interface SheetPicture {
	readonly title: string;
	readonly under: string;
	readonly ground: SheetGround;
	readonly daylight: string;
	readonly windows: readonly ColouredPath[];
}

/** Measures of the picture in points of the drawing. */
const layout = { width: 1200, left: 64, right: 24, top: 84, rowHeight: 2.4, bottom: 44 };

/** The light colours of the product: a picture is printed or mailed, whatever the screen is set to. */
const colours = {
	page: '#ffffff',
	ink: '#14232a',
	quiet: '#4a5d64',
	night: '#24363f',
	daylight: '#e2ebe8',
	grid: '#ffffff'
};

const font = "'Nunito Variable', Nunito, sans-serif";

/** One thing painted, in order; paths are in minutes across and rows down. */
type Painted =
	| { kind: 'box'; x: number; y: number; width: number; height: number; fill: string }
	| { kind: 'path'; d: string; fill: string; opacity: number }
	| { kind: 'line'; x1: number; y1: number; x2: number; y2: number; dash: boolean; stroke: string }
	| {
			kind: 'text';
			x: number;
			y: number;
			text: string;
			size: number;
			weight: number;
			fill: string;
			anchor: 'start' | 'middle' | 'end';
	  };

interface Painting {
	width: number;
	height: number;
	plot: { x: number; y: number; width: number; height: number; scaleX: number; scaleY: number };
	fromMinute: number;
	painted: Painted[];
}

function paint({ title, under, ground, daylight, windows }: SheetPicture): Painting {
	const { width, left, right, top, rowHeight, bottom } = layout;
	const minutes = (ground.toHour - ground.fromHour) * 60;
	const fromMinute = ground.fromHour * 60;
	const plot = {
		x: left,
		y: top,
		width: width - left - right,
		height: ground.days * rowHeight,
		scaleX: (width - left - right) / minutes,
		scaleY: rowHeight
	};
	const x = (minute: number) => left + (minute - fromMinute) * plot.scaleX;
	const y = (row: number) => top + row * rowHeight;
	const text = (
		at: { x: number; y: number },
		said: string,
		more: Partial<Extract<Painted, { kind: 'text' }>> = {}
	): Painted => ({
		kind: 'text',
		...at,
		text: said,
		size: 13,
		weight: 400,
		fill: colours.quiet,
		anchor: 'start',
		...more
	});
	const line = (x1: number, y1: number, x2: number, y2: number, stroke: string, dash = false) =>
		({ kind: 'line', x1, y1, x2, y2, dash, stroke }) as const;
	const painted: Painted[] = [
		{ kind: 'box', x: 0, y: 0, width, height: top + plot.height + bottom, fill: colours.page },
		text({ x: left, y: 36 }, title, { size: 21, weight: 800, fill: colours.ink }),
		text({ x: left, y: 60 }, under),
		{ kind: 'box', ...plot, fill: colours.night },
		{ kind: 'path', d: daylight, fill: colours.daylight, opacity: 1 },
		...windows.map(({ d, colour, open }) => ({
			kind: 'path' as const,
			d,
			fill: colour,
			opacity: open ? 1 : CLOSED_OPACITY
		}))
	];
	for (let hour = Math.ceil(ground.fromHour / 3) * 3; hour <= ground.toHour; hour += 3) {
		painted.push(line(x(hour * 60), top, x(hour * 60), top + plot.height, colours.grid));
		painted.push(
			text({ x: x(hour * 60), y: top + plot.height + 20 }, `${hour}:00`, { anchor: 'middle' })
		);
	}
	for (const { month, row, days } of ground.months) {
		if (row > 0) painted.push(line(left, y(row), left + plot.width, y(row), colours.grid));
		painted.push(
			text({ x: left - 10, y: y(row + days / 2) + 4 }, formatMonthShort(month), { anchor: 'end' })
		);
	}
	for (const { fromMinute: from, toMinute: to, firstRow, endRow } of ground.frames) {
		const sides = [
			[x(from), y(firstRow), x(to), y(firstRow)],
			[x(from), y(endRow), x(to), y(endRow)],
			[x(from), y(firstRow), x(from), y(endRow)],
			[x(to), y(firstRow), x(to), y(endRow)]
		] as const;
		// Dark dashes on a pale line: seen on night and on daylight.
		painted.push(...sides.map((side) => line(...side, colours.daylight)));
		painted.push(...sides.map((side) => line(...side, colours.ink, true)));
	}
	const changes = ground.changes.map(
		({ date, forwardMinutes }) =>
			`${formatDate(date)}: clocks ${forwardMinutes > 0 ? 'forward' : 'back'} ${Math.abs(forwardMinutes)} min`
	);
	if (changes.length > 0) {
		painted.push(text({ x: left, y: top + plot.height + 38 }, changes.join(' · ')));
	}
	return { width, height: top + plot.height + bottom, plot, fromMinute, painted };
}

const escaped = (text: string) =>
	text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('"', '&quot;');

/** The sheet as a file of SVG, by itself. */
export function sheetSvg(picture: SheetPicture): string {
	const { width, height, plot, fromMinute, painted } = paint(picture);
	const parts = painted.map((one) => {
		if (one.kind === 'box') {
			return `<rect x="${one.x}" y="${one.y}" width="${one.width}" height="${one.height}" fill="${one.fill}"/>`;
		}
		if (one.kind === 'path') {
			return `<path clip-path="url(#plot)" transform="translate(${plot.x} ${plot.y}) scale(${plot.scaleX} ${plot.scaleY}) translate(${-fromMinute} 0)" fill="${one.fill}" fill-opacity="${one.opacity}" shape-rendering="crispEdges" d="${one.d}"/>`;
		}
		if (one.kind === 'line') {
			const dash = one.dash
				? ' stroke-dasharray="4 3" stroke-width="1.5"'
				: ` stroke-opacity="${one.stroke === colours.grid ? 0.6 : 1}"`;
			return `<line x1="${one.x1}" y1="${one.y1}" x2="${one.x2}" y2="${one.y2}" stroke="${one.stroke}"${dash}/>`;
		}
		return `<text x="${one.x}" y="${one.y}" font-size="${one.size}" font-weight="${one.weight}" fill="${one.fill}" text-anchor="${one.anchor}">${escaped(one.text)}</text>`;
	});
	// The clip is in the drawing's own units: minutes and rows.
	const clip = `<clipPath id="plot"><rect x="${fromMinute}" y="0" width="${plot.width / plot.scaleX}" height="${picture.ground.days}"/></clipPath>`;
	return `<?xml version="1.0" encoding="UTF-8"?>
<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${height}" viewBox="0 0 ${width} ${height}" font-family="${font}" role="img" aria-label="${escaped(picture.title)}">
<title>${escaped(picture.title)}</title>
<defs>${clip}</defs>
${parts.join('\n')}
</svg>
`;
}

/**
 * The sheet as PNG, painted at twice its measures; in the page, so that its own type face is there.
 * @throws Error when the browser makes no picture
 */
export async function sheetPng(picture: SheetPicture): Promise<Blob> {
	const { width, height, plot, fromMinute, painted } = paint(picture);
	const canvas = document.createElement('canvas');
	const scale = 2;
	canvas.width = width * scale;
	canvas.height = Math.ceil(height * scale);
	const pen = canvas.getContext('2d');
	if (!pen) throw new Error('This browser paints no pictures.');
	await document.fonts.ready;
	pen.scale(scale, scale);
	for (const one of painted) {
		pen.save();
		if (one.kind === 'box') {
			pen.fillStyle = one.fill;
			pen.fillRect(one.x, one.y, one.width, one.height);
		} else if (one.kind === 'path') {
			pen.beginPath();
			pen.rect(plot.x, plot.y, plot.width, plot.height);
			pen.clip();
			pen.translate(plot.x, plot.y);
			pen.scale(plot.scaleX, plot.scaleY);
			pen.translate(-fromMinute, 0);
			pen.globalAlpha = one.opacity;
			pen.fillStyle = one.fill;
			pen.fill(new Path2D(one.d));
		} else if (one.kind === 'line') {
			pen.strokeStyle = one.stroke;
			pen.globalAlpha = one.stroke === colours.grid ? 0.6 : 1;
			pen.lineWidth = one.dash ? 1.5 : 1;
			pen.setLineDash(one.dash ? [4, 3] : []);
			pen.beginPath();
			pen.moveTo(one.x1, one.y1);
			pen.lineTo(one.x2, one.y2);
			pen.stroke();
		} else {
			pen.font = `${one.weight} ${one.size}px ${font}`;
			pen.fillStyle = one.fill;
			pen.textAlign = one.anchor === 'middle' ? 'center' : one.anchor;
			pen.fillText(one.text, one.x, one.y);
		}
		pen.restore();
	}
	const blob = await new Promise<Blob | null>((resolve) => canvas.toBlob(resolve, 'image/png'));
	if (!blob) throw new Error('This browser made no picture.');
	return blob;
}
