import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	breakDown,
	breakDownCredit,
	decimalAmount,
	formatMoney,
	minorDigits,
	parseAmount,
	spreadCredit,
	type GrossLine
} from '$lib/money';

const seed = Number(process.env.SEED ?? 20270301);
console.log(`money: seed ${seed}`);

const lineOf = fc.record({
	grossMinor: fc.integer({ min: 0, max: 5_000_000 }),
	taxCategory: fc.constantFrom('S' as const, 'Z' as const),
	taxPercent: fc.constantFrom('0', '2.5', '5.50', '7', '10', '10.00', '13', '19', '20', '25.5')
});
const linesOf = fc.array(lineOf, { minLength: 1, maxLength: 12 });

describe('amounts', () => {
	// ISO 4217: minor units of EUR 2, JPY 0, KWD 3.
	it('knows the minor units of currencies', () => {
		expect(['EUR', 'JPY', 'KWD'].map(minorDigits)).toEqual([2, 0, 3]);
		expect(() => minorDigits('XYZ')).toThrow(RangeError);
	});
	it('writes amounts with all their digits', () => {
		expect(formatMoney(134400, 'EUR')).toBe('1,344.00 EUR');
		expect(formatMoney(5, 'EUR')).toBe('0.05 EUR');
		expect(formatMoney(-123456789, 'JPY')).toBe('-123,456,789 JPY');
		expect(decimalAmount(1, 'KWD')).toBe('0.001');
		expect(() => formatMoney(1.5, 'EUR')).toThrow(RangeError);
	});
	it('reads what people type, and nothing else', () => {
		expect(parseAmount(' 12,50 ', 'EUR')).toBe(1250);
		expect(parseAmount('12.5', 'EUR')).toBe(1250);
		expect(parseAmount('500', 'JPY')).toBe(500);
		for (const wrong of ['', '-1', '1.234', '1 000', 'abc', '1e3', '12.', '١٢']) {
			expect(parseAmount(wrong, 'EUR'), wrong).toBeNull();
		}
		expect(parseAmount('12.5', 'JPY')).toBeNull();
	});
	it('reads back whatever it writes', () => {
		fc.assert(
			fc.property(
				fc.integer({ min: 0, max: 1e12 }),
				fc.constantFrom('EUR', 'JPY', 'KWD'),
				(amount, currency) => parseAmount(decimalAmount(amount, currency), currency) === amount
			),
			{ seed }
		);
	});
});

describe('tax', () => {
	it('splits a mixed document', () => {
		// Worked by hand: 156.00 at 10 %, 24.00 and 72.00 at 20 %.
		const lines: GrossLine[] = [
			{ grossMinor: 15600, taxCategory: 'S', taxPercent: '10' },
			{ grossMinor: 2400, taxCategory: 'S', taxPercent: '20' },
			{ grossMinor: 7200, taxCategory: 'S', taxPercent: '20.00' }
		];
		expect(breakDown(lines)).toEqual({
			lineNetsMinor: [14182, 2000, 6000],
			taxes: [
				{ category: 'S', percent: '20', taxableMinor: 8000, taxMinor: 1600 },
				{ category: 'S', percent: '10', taxableMinor: 14182, taxMinor: 1418 }
			],
			netMinor: 22182,
			taxMinor: 3018,
			grossMinor: 25200
		});
	});
	it('keeps a gross that no net and rounded tax could make', () => {
		// 32.50 at 10 %: 29.55 net, and 2.95 left (10 % of 29.55 rounds to 2.96).
		const { netMinor, taxMinor } = breakDown([
			{ grossMinor: 3250, taxCategory: 'S', taxPercent: '10' }
		]);
		expect([netMinor, taxMinor]).toEqual([2955, 295]);
	});
	it('adds up for any lines', () => {
		fc.assert(
			fc.property(linesOf, (lines) => {
				const { lineNetsMinor, taxes, netMinor, taxMinor, grossMinor } = breakDown(lines);
				const sum = (values: readonly number[]) => values.reduce((a, b) => a + b, 0);
				expect(grossMinor).toBe(sum(lines.map((line) => line.grossMinor)));
				expect(sum(lineNetsMinor)).toBe(netMinor);
				expect(sum(taxes.map((tax) => tax.taxMinor))).toBe(taxMinor);
				lineNetsMinor.forEach((net, i) => {
					const line = lines[i]!;
					expect(net).toBeGreaterThanOrEqual(0);
					expect(net).toBeLessThanOrEqual(line.grossMinor);
					const exact = line.grossMinor / (1 + Number(line.taxPercent) / 100);
					expect(Math.abs(net - exact)).toBeLessThan(1.000001);
				});
			}),
			{ seed, numRuns: 2000 }
		);
	});
	it('credits a document in any chain of parts without a rest', () => {
		fc.assert(
			fc.property(linesOf, fc.array(fc.double({ min: 0, max: 1, noNaN: true })), (lines, parts) => {
				const whole = breakDown(lines);
				let left = lines;
				let net = 0;
				let tax = 0;
				for (const part of [...parts, 1]) {
					const total = left.reduce((sum, line) => sum + line.grossMinor, 0);
					const amount = part === 1 ? total : Math.floor(total * part);
					const credits = spreadCredit(left, amount);
					expect(credits.reduce((a, b) => a + b, 0)).toBe(amount);
					const credit = breakDownCredit(
						left.map((line, i) => ({ ...line, creditMinor: credits[i]! }))
					);
					expect(credit.grossMinor).toBe(amount);
					net += credit.netMinor;
					tax += credit.taxMinor;
					left = left.map((line, i) => ({ ...line, grossMinor: line.grossMinor - credits[i]! }));
				}
				expect([net, tax]).toEqual([whole.netMinor, whole.taxMinor]);
			}),
			{ seed, numRuns: 500 }
		);
	});
	it('refuses what is no amount', () => {
		for (const grossMinor of [-1, 0.5, NaN, Infinity]) {
			expect(() => breakDown([{ grossMinor, taxCategory: 'S', taxPercent: '10' }])).toThrow(
				RangeError
			);
		}
		expect(() => breakDown([{ grossMinor: 1, taxCategory: 'S', taxPercent: '100' }])).toThrow(
			RangeError
		);
	});
});
