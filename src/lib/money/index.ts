/** Amounts, tax, rounding and line totals. Pure: whole minor units in, whole minor units out. */
export { decimalAmount, formatMoney, isCurrency, minorDigits, parseAmount } from './currency';
export {
	breakDown,
	breakDownCredit,
	plainPercent,
	rateBasisPoints,
	spreadCredit,
	type Breakdown,
	type GrossLine,
	type TaxCategory,
	type TaxTotal
} from './breakdown';
