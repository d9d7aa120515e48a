/** Code list UNCL 5305: S standard rate, Z zero rate, E exempt. */
export type TaxCategory = 'S' | 'Z' | 'E';

/** A line as it was sold: its gross is fixed. */
export interface GrossLine {
	/** Whole minor units, tax included. */
	readonly grossMinor: number;
	readonly taxCategory: TaxCategory;
	/** Decimal string from `0` to below `100`, such as `10` or `5.50`. */
	readonly taxPercent: string;
}

/** Tax of one category and rate. */
export interface TaxTotal {
	readonly category: TaxCategory;
	readonly percent: string;
	readonly taxableMinor: number;
	readonly taxMinor: number;
}

export interface Breakdown {
	/** One net a line, in the order of the lines. */
	readonly lineNetsMinor: readonly number[];
	readonly taxes: readonly TaxTotal[];
	readonly netMinor: number;
	readonly taxMinor: number;
	readonly grossMinor: number;
}

/**
 * A rate in units of a ten-thousandth of the whole: `10` is 1000, `5.50` is 550.
 * @throws RangeError when it is no rate from 0 to below 100 with at most two decimals
 */
export function rateBasisPoints(percent: string): number {
	const match = /^(\d{1,2})(?:\.(\d{1,2}))?$/.exec(percent);
	if (!match) throw new RangeError(`${percent} is no tax rate from 0 to 99.99`);
	return Number(match[1]) * 100 + Number((match[2] ?? '').padEnd(2, '0'));
}

/** `10.00` and `10` are one rate. */
export function plainPercent(percent: string): string {
	const points = rateBasisPoints(percent);
	return String(points / 100);
}

const whole = 10_000n;

/** Gross to net, rounded half up, away from zero: exact in integers. */
function netOf(grossMinor: number, basisPoints: number): number {
	const gross = BigInt(Math.abs(grossMinor));
	const divisor = whole + BigInt(basisPoints);
	const net = Number((gross * whole * 2n + divisor) / (divisor * 2n));
	return grossMinor < 0 ? -net : net;
}

/** Net rounded down, and what was cut off as a part of the divisor. */
function flooredNet(grossMinor: number, basisPoints: number): { net: number; rest: number } {
	const divisor = whole + BigInt(basisPoints);
	const scaled = BigInt(grossMinor) * whole;
	return { net: Number(scaled / divisor), rest: Number(scaled % divisor) };
}

/**
 * Splits lines with gross prices into net and tax so that everything adds up: for each category and
 * rate net = round half up (gross / (1 + rate)) and tax = gross - net; the lines of that rate get
 * their floored nets and then one unit each to the largest remainders until they sum to the rate's
 * net (business rules BR-CO-10, -13, -15 and BR-S-08 of EN 16931-1 hold exactly).
 *
 * @param lines gross amounts of 0 or more
 * @throws RangeError when an amount is no whole number of 0 or more or a rate is none
 */
export function breakDown(lines: readonly GrossLine[]): Breakdown {
	const groups = new Map<string, number[]>();
	lines.forEach(({ grossMinor, taxCategory, taxPercent }, index) => {
		if (!Number.isSafeInteger(grossMinor) || grossMinor < 0) {
			throw new RangeError(`line ${index}: gross must be a whole number of 0 or more`);
		}
		const key = `${taxCategory} ${plainPercent(taxPercent)}`;
		groups.set(key, [...(groups.get(key) ?? []), index]);
	});
	const lineNetsMinor = lines.map(() => 0);
	const taxes: TaxTotal[] = [];
	for (const members of groups.values()) {
		const { taxCategory, taxPercent } = lines[members[0]!]!;
		const basisPoints = rateBasisPoints(taxPercent);
		const gross = members.reduce((sum, index) => sum + lines[index]!.grossMinor, 0);
		const net = netOf(gross, basisPoints);
		const floored = members.map((index) => ({
			index,
			...flooredNet(lines[index]!.grossMinor, basisPoints)
		}));
		let missing = net - floored.reduce((sum, line) => sum + line.net, 0);
		// Largest remainder first; among equals the earlier line, so that the result never depends on luck.
		const byRest = [...floored].sort((a, b) => b.rest - a.rest || a.index - b.index);
		for (const line of byRest) {
			const extra = missing > 0 ? 1 : 0;
			missing -= extra;
			lineNetsMinor[line.index] = line.net + extra;
		}
		taxes.push({
			category: taxCategory,
			percent: plainPercent(taxPercent),
			taxableMinor: net,
			taxMinor: gross - net
		});
	}
	taxes.sort((a, b) =>
		a.category === b.category
			? rateBasisPoints(b.percent) - rateBasisPoints(a.percent)
			: a.category.localeCompare(b.category)
	);
	const netMinor = taxes.reduce((sum, tax) => sum + tax.taxableMinor, 0);
	const taxMinor = taxes.reduce((sum, tax) => sum + tax.taxMinor, 0);
	return { lineNetsMinor, taxes, netMinor, taxMinor, grossMinor: netMinor + taxMinor };
}

/** What a line still stands for after an amount of it was credited. */
export interface CreditedLine extends GrossLine {
	/** Gross that goes back, 0 to `grossMinor`. */
	readonly creditMinor: number;
}

/**
 * The breakdown of a partial credit: breakdown(before) less breakdown(after), not a rounding of its
 * own, so that any chain of credits sums exactly to the original.
 * @throws RangeError when a credit exceeds its line
 */
export function breakDownCredit(lines: readonly CreditedLine[]): Breakdown {
	const before = breakDown(lines);
	const after = breakDown(
		lines.map((line, index) => {
			if (!(line.creditMinor >= 0 && line.creditMinor <= line.grossMinor)) {
				throw new RangeError(`line ${index}: the credit must be from 0 to the line's gross`);
			}
			return { ...line, grossMinor: line.grossMinor - line.creditMinor };
		})
	);
	const taxes = before.taxes.map((tax, i) => ({
		...tax,
		taxableMinor: tax.taxableMinor - after.taxes[i]!.taxableMinor,
		taxMinor: tax.taxMinor - after.taxes[i]!.taxMinor
	}));
	return {
		lineNetsMinor: before.lineNetsMinor.map((net, i) => net - after.lineNetsMinor[i]!),
		taxes,
		netMinor: before.netMinor - after.netMinor,
		taxMinor: before.taxMinor - after.taxMinor,
		grossMinor: before.grossMinor - after.grossMinor
	};
}

/**
 * Spreads an amount over lines by their gross, whole minor units, largest remainders first.
 * @param amountMinor 0 to the sum of the lines
 */
export function spreadCredit(lines: readonly GrossLine[], amountMinor: number): number[] {
	const total = lines.reduce((sum, line) => sum + line.grossMinor, 0);
	if (!(Number.isSafeInteger(amountMinor) && amountMinor >= 0 && amountMinor <= total)) {
		throw new RangeError(`the amount must be from 0 to ${total}`);
	}
	if (total === 0) return lines.map(() => 0);
	const parts = lines.map((line, index) => {
		const scaled = BigInt(line.grossMinor) * BigInt(amountMinor);
		return { index, part: Number(scaled / BigInt(total)), rest: Number(scaled % BigInt(total)) };
	});
	let missing = amountMinor - parts.reduce((sum, { part }) => sum + part, 0);
	const result = parts.map(({ part }) => part);
	for (const { index } of [...parts].sort((a, b) => b.rest - a.rest || a.index - b.index)) {
		if (missing-- <= 0) break;
		result[index]!++;
	}
	return result;
}
