/**
 * Minor-unit digits of a currency (ISO 4217): 2 for EUR, 0 for JPY, 3 for KWD.
 * @throws RangeError when the code is not one that is in use
 */
export function minorDigits(currency: string): number {
	if (!isCurrency(currency)) throw new RangeError(`${currency} is no ISO 4217 code in use`);
	const format = new Intl.NumberFormat('en', { style: 'currency', currency });
	return format.resolvedOptions().maximumFractionDigits ?? 2;
}

const known = new Set(Intl.supportedValuesOf('currency'));

/** Whether a text is the ISO 4217 code of a currency. */
export function isCurrency(code: string): boolean {
	return known.has(code);
}

const checked = (amountMinor: number): number => {
	if (!Number.isSafeInteger(amountMinor)) {
		throw new RangeError(`an amount is a whole number of minor units, not ${amountMinor}`);
	}
	return amountMinor;
};

/** An amount as a plain decimal with all its digits: 1250 EUR is `12.50`, 500 JPY is `500`. */
export function decimalAmount(amountMinor: number, currency: string): string {
	const digits = minorDigits(currency);
	const sign = checked(amountMinor) < 0 ? '-' : '';
	const units = String(Math.abs(amountMinor)).padStart(digits + 1, '0');
	return digits === 0 ? sign + units : `${sign}${units.slice(0, -digits)}.${units.slice(-digits)}`;
}

/** The one formatter of money: `12.50 EUR`, `1,344.00 EUR`, `500 JPY`. */
export function formatMoney(amountMinor: number, currency: string): string {
	const [, sign = '', whole = '', fraction = ''] =
		/^(-?)(\d+)(.*)$/.exec(decimalAmount(amountMinor, currency)) ?? [];
	return `${sign}${whole.replaceAll(/\B(?=(\d{3})+$)/g, ',')}${fraction} ${currency}`;
}

/**
 * Reads an amount as people type it: `12.50`, `12,50` or `12`. No thousands separators.
 * @returns whole minor units, or null when it is no amount of that currency (`12.505`, `-1`, `abc`)
 */
export function parseAmount(text: string, currency: string): number | null {
	const match = /^(\d{1,12})(?:[.,](\d+))?$/.exec(text.trim());
	if (!match) return null;
	const digits = minorDigits(currency);
	const fraction = match[2] ?? '';
	if (fraction.length > digits) return null;
	const amount = Number(match[1] + fraction.padEnd(digits, '0'));
	return Number.isSafeInteger(amount) ? amount : null;
}
