import { invalid } from './errors.ts';

const NO_DECIMALS = new Set(
	'bif clp djf gnf jpy kmf krw mga pyg rwf vnd vuv xaf xof xpf'.split(' ')
);
const THREE_DECIMALS = new Set('bhd jod kwd omr tnd'.split(' '));
/** Without decimals by ISO 4217, but the service counts them in hundredths and takes whole units only. */
const WHOLE_HUNDREDTHS = new Set(['isk', 'ugx']);
const TWO_DECIMALS = new Set(
	(
		'aed afn all amd ang aoa ars aud awg azn bam bbd bdt bgn bmd bnd bob brl bsd bwp byn bzd cad ' +
		'cdf chf cny cop crc cve czk dkk dop dzd egp etb eur fjd fkp gbp gel gip gmd gtq gyd hkd hnl ' +
		'htg huf idr ils inr jmd kes kgs khr kyd kzt lak lbp lkr lrd lsl mad mdl mkd mmk mnt mop mur ' +
		'mvr mwk mxn myr mzn nad ngn nio nok npr nzd pab pen pgk php pkr pln qar ron rsd sar sbd scr ' +
		'sek sgd shp sle sos srd std szl thb tjs top try ttd twd tzs uah usd uyu uzs wst xcd yer zar zmw'
	).split(' ')
);

/** Least amount of a charge in minor units; other currencies: what is worth about half a dollar. */
const LEAST: Record<string, number> = {
	...{ usd: 50, aed: 200, aud: 50, bgn: 100, brl: 50, cad: 50, chf: 50, czk: 1500, dkk: 250 },
	...{ eur: 50, gbp: 30, hkd: 400, huf: 17500, inr: 50, jpy: 50, mxn: 1000, myr: 200, nok: 300 },
	...{ nzd: 50, pln: 200, ron: 200, sek: 300, sgd: 50, thb: 1000, kwd: 150, bhd: 190 }
};
const MOST_MINOR = 99_999_999;

/** Whether the service takes this currency, written in small letters. */
export function isCurrency(code: string): boolean {
	return (
		NO_DECIMALS.has(code) ||
		THREE_DECIMALS.has(code) ||
		WHOLE_HUNDREDTHS.has(code) ||
		TWO_DECIMALS.has(code)
	);
}

/** Decimals in which the service counts a currency. */
export function decimalsOf(currency: string): number {
	if (NO_DECIMALS.has(currency)) return 0;
	return THREE_DECIMALS.has(currency) ? 3 : 2;
}

/** An amount for people: "12.50 EUR". */
export function showAmount(amountMinor: number, currency: string): string {
	const decimals = decimalsOf(currency);
	return `${(amountMinor / 10 ** decimals).toFixed(decimals)} ${currency.toUpperCase()}`;
}

/**
 * Checks what may be charged at all.
 * @throws ApiError `amount_too_small`, `amount_too_large`, or for a fraction that the currency lacks.
 */
export function checkChargeable(amountMinor: number, currency: string, param: string): void {
	const least = LEAST[currency] ?? 50;
	if (amountMinor < least) {
		throw invalid(
			`The total amount must be at least ${showAmount(least, currency)}; you passed ` +
				`${showAmount(amountMinor, currency)}.`,
			{ param, code: 'amount_too_small' }
		);
	}
	if (amountMinor > MOST_MINOR) {
		throw invalid(`Amount must be no more than ${showAmount(MOST_MINOR, currency)}`, {
			param,
			code: 'amount_too_large'
		});
	}
	const step = THREE_DECIMALS.has(currency) ? 10 : WHOLE_HUNDREDTHS.has(currency) ? 100 : 1;
	if (amountMinor % step !== 0) {
		throw invalid(`Amounts in ${currency.toUpperCase()} must be evenly divisible by ${step}.`, {
			param
		});
	}
}

/** The service's own fee on a charge. Invented: one and a half percent and twenty-five minor units. */
export function serviceFee(amountMinor: number): number {
	return Math.min(amountMinor, Math.round(amountMinor * 0.015) + 25);
}

/** The service's fee for a dispute. Invented: fifteen of the currency. */
export function disputeFee(currency: string): number {
	return 15 * 10 ** decimalsOf(currency);
}

/**
 * The part of an application fee that goes back when `refunded` of `amount` has gone back in all, less
 * what went back before. The last refund takes what rounding left.
 */
export function feePart(fee: number, amount: number, refunded: number, before: number): number {
	return Math.round((fee * refunded) / amount) - before;
}
