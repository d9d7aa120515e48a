import { z } from 'zod';
import { parseCoordinate, type Axis } from '../coordinates';
import { isCurrency, parseAmount, rateBasisPoints } from '../money';
import { isLocalDate, isTimeZone, parseTimeOfDay } from '../schedule';
import { emailField } from './people';

/** A decimal number as people type it, comma or point. */
const decimal = (what: string, least: number, greatest: number) =>
	z
		.string()
		.trim()
		.transform((text) => text.replace(',', '.').replace('−', '-'))
		.refine((text) => /^[+-]?\d+(\.\d+)?$/.test(text), `Give ${what} as a number.`)
		.transform(Number)
		.refine(
			(value) => value >= least && value <= greatest,
			`Give ${what} from ${least} to ${greatest}.`
		);

/** Degrees, decimal or in minutes and seconds. */
const coordinate = (axis: Axis) =>
	z
		.string()
		.trim()
		.max(60, 'That is too long.')
		.transform((text, context) => {
			const degrees = parseCoordinate(text, axis);
			if (degrees !== null) return degrees;
			const most = axis === 'latitude' ? 90 : 180;
			context.addIssue({
				code: 'custom',
				message: `Give the ${axis} from -${most} to ${most}, such as ${axis === 'latitude' ? '45.9312 or 45 55 52 N' : '6.8745 or 6 52 28 E'}.`
			});
			return z.NEVER;
		});

const whole = (what: string, least: number, greatest: number) =>
	z
		.string()
		.trim()
		.refine((text) => /^\d{1,6}$/.test(text), `Give ${what} as a whole number.`)
		.transform(Number)
		.refine(
			(value) => value >= least && value <= greatest,
			`Give ${what} from ${least} to ${greatest}.`
		);

const line = (what: string, most = 100) =>
	z
		.string()
		.trim()
		.min(1, `Give ${what}.`)
		.max(most, `Use at most ${most} characters.`)
		.regex(/^[^\p{Cc}]*$/u, 'Use letters, digits and signs on one line.');

const text = (most: number) => z.string().trim().max(most, `Use at most ${most} characters.`);

const placeShape = {
	name: line('the site’s name'),
	latitudeDeg: coordinate('latitude'),
	longitudeDeg: coordinate('longitude'),
	elevationM: decimal('the elevation', -500, 9000),
	currency: z
		.string()
		.trim()
		.toUpperCase()
		.refine(isCurrency, 'Give the three letters of a currency, such as EUR.')
};

export const newSiteSchema = z.object({
	...placeShape,
	timeZone: z
		.string()
		.trim()
		.refine((value) => value === '' || isTimeZone(value), 'Give an IANA zone, or leave it empty.')
		.default('')
});

export const siteSchema = z.object({
	...placeShape,
	timeZone: z.string().trim().refine(isTimeZone, 'Give an IANA zone such as Europe/Paris.'),
	description: text(4000),
	arrival: text(4000),
	pictureAlt: text(200),
	gustLimitMs: decimal('the limit', 1, 40),
	open: z.boolean().default(false)
});

const localDate = z.string().trim().refine(isLocalDate, 'Give a date such as 2027-03-28.');

export const windowsRangeSchema = z
	.object({ from: localDate, to: localDate })
	.refine(({ from, to }) => from <= to, { path: ['to'], error: 'The end is before the start.' });

/** Opening hours of a weekday as typed: `09:00-12:00, 14:00-18:00`; empty is closed. */
export function parseHours(typed: string): { from: string; to: string }[] | null {
	const spans: { from: string; to: string }[] = [];
	for (const part of typed.split(/[,;]/).map((one) => one.trim())) {
		if (part === '') continue;
		const match = /^(\d{1,2}):(\d{2})\s*(?:-|–|to)\s*(\d{1,2}):(\d{2})$/.exec(part);
		if (!match) return null;
		const from = `${match[1]!.padStart(2, '0')}:${match[2]}`;
		const to = `${match[3]!.padStart(2, '0')}:${match[4]}`;
		try {
			if (parseTimeOfDay(from) >= parseTimeOfDay(to)) return null;
		} catch {
			return null;
		}
		spans.push({ from, to });
	}
	return spans;
}

/** Dates as typed, parted by spaces, commas or line breaks. */
export function parseDates(typed: string): string[] {
	return typed.split(/[\s,;]+/).filter((part) => part !== '');
}

export const programmeSchema = z
	.object({
		name: line('the programme’s name'),
		zoneId: z.uuid('Choose a zone.'),
		seasonFrom: localDate,
		seasonTo: localDate,
		/** Seven, Monday first. */
		hours: z
			.array(
				z
					.string()
					.trim()
					.max(100)
					.refine((typed) => parseHours(typed) !== null, 'Give hours such as 09:00-18:00.')
			)
			.length(7),
		daysOff: z
			.string()
			.max(5000)
			.refine(
				(typed) => parseDates(typed).every((part) => localDate.safeParse(part).success),
				'Give dates such as 2027-03-28, one a line.'
			),
		slotMinutes: whole('the length', 5, 240),
		gapMinutes: whole('the gap', 0, 240),
		gridMinutes: whole('the grid', 1, 60),
		capacity: whole('the places', 1, 5000),
		refundHours: whole('the hours', 0, 2000),
		refundPercent: whole('the percentage', 0, 100),
		priceId: z.array(z.union([z.uuid(), z.literal('')])).max(12),
		priceName: z.array(text(60)).max(12),
		priceAmount: z.array(z.string().trim().max(20)).max(12),
		priceTax: z.array(z.string().trim().max(6)).max(12)
	})
	.refine(({ seasonFrom, seasonTo }) => seasonFrom <= seasonTo, {
		path: ['seasonTo'],
		error: 'The end is before the start.'
	});

export type ProgrammeForm = z.infer<typeof programmeSchema>;

/** The price rows of a programme, or the first thing wrong with them. Rows left empty are none. */
export function parsePrices(
	form: Pick<ProgrammeForm, 'priceId' | 'priceName' | 'priceAmount' | 'priceTax'>,
	currency: string
):
	| { prices: { id: string; name: string; amountMinor: number; taxPercent: string }[] }
	| { fault: string } {
	const prices: { id: string; name: string; amountMinor: number; taxPercent: string }[] = [];
	for (const [i, name] of form.priceName.entries()) {
		const amount = form.priceAmount[i] ?? '';
		if (name === '' && amount === '') continue;
		if (name === '') return { fault: `Price ${i + 1} has no name.` };
		const amountMinor = parseAmount(amount, currency);
		if (amountMinor === null) {
			return { fault: `${name}: give the price in ${currency}, such as 12 or 12.50.` };
		}
		const taxPercent = (form.priceTax[i] || '0').replace(',', '.');
		try {
			rateBasisPoints(taxPercent);
		} catch {
			return { fault: `${name}: give the tax as a percentage from 0 to 99.99.` };
		}
		prices.push({ id: form.priceId[i] ?? '', name, amountMinor, taxPercent });
	}
	if (prices.length === 0) return { fault: 'Give at least one price.' };
	return { prices };
}

export const waterSchema = z.object({
	kind: z.enum(['disinfection', 'sample', 'inspection']),
	doneOn: localDate,
	nextDueOn: z.union([z.literal(''), localDate]).default(''),
	note: text(1000).default('')
});

export const publishSchema = z.object({ digest: z.string().min(1).max(64) });

export const sellerSchema = z.object({
	name: line('the name'),
	street: line('the street'),
	postcode: line('the postcode', 20),
	city: line('the town'),
	country: z
		.string()
		.trim()
		.toUpperCase()
		.regex(/^[A-Z]{2}$/, 'Give the two letters of the country, such as AT.'),
	taxId: text(40),
	email: emailField
});
