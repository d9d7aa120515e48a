/** How the double treats a card number. */
export interface Card {
	number: string;
	label: string;
	brand: string;
	outcome: 'pays' | 'declines';
	declineCode?: string;
	/** The bank asks its customer first. */
	challenge?: true;
	/** What comes of a refund: it fails after having succeeded, or takes a while. */
	refund?: 'fails' | 'pends';
	/** The cardholder disputes the charge soon after. */
	disputes?: true;
}

/** The published test numbers that this double plays. */
export const CARDS: readonly Card[] = [
	{ number: '4242424242424242', label: 'Pays', brand: 'visa', outcome: 'pays' },
	{ number: '5555555555554444', label: 'Pays (Mastercard)', brand: 'mastercard', outcome: 'pays' },
	{
		number: '4000000000000002',
		label: 'Declined',
		brand: 'visa',
		outcome: 'declines',
		declineCode: 'generic_decline'
	},
	{
		number: '4000000000009995',
		label: 'Declined: not enough money',
		brand: 'visa',
		outcome: 'declines',
		declineCode: 'insufficient_funds'
	},
	{
		number: '4000002500003155',
		label: 'Bank asks first (3-D Secure)',
		brand: 'visa',
		outcome: 'pays',
		challenge: true
	},
	{
		number: '4000002760003184',
		label: 'Bank always asks first (3-D Secure)',
		brand: 'visa',
		outcome: 'pays',
		challenge: true
	},
	{
		number: '4000000000005126',
		label: 'Pays; a refund fails later',
		brand: 'visa',
		outcome: 'pays',
		refund: 'fails'
	},
	{
		number: '4000000000007726',
		label: 'Pays; a refund takes a while',
		brand: 'visa',
		outcome: 'pays',
		refund: 'pends'
	},
	{
		number: '4000000000000259',
		label: 'Pays; the charge is disputed later',
		brand: 'visa',
		outcome: 'pays',
		disputes: true
	}
];

/** Finds a card by its number, blanks allowed; undefined when it is not a test number. */
export function findCard(number: string): Card | undefined {
	const digits = number.replace(/[\s-]/g, '');
	return CARDS.find((card) => card.number === digits);
}
