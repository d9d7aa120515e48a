/** States of an order, in words, each with its colour class. */
export const orderWords = {
	pending: { label: 'being paid', colour: 'text-caution' },
	paid: { label: 'paid', colour: 'text-good' },
	expired: { label: 'expired unpaid', colour: 'text-quiet' },
	cancelled: { label: 'cancelled', colour: 'text-stop' }
} as const;

/** States of a refund, in words. */
export const refundWordsOf = {
	asked: { label: 'asked', colour: 'text-caution' },
	sent: { label: 'sent', colour: 'text-caution' },
	done: { label: 'done', colour: 'text-good' },
	failed: { label: 'failed', colour: 'text-stop' }
} as const;

export const ticketWords = {
	valid: 'valid',
	used: 'used',
	moved: 'moved',
	void: 'void'
} as const;

export const documentWords = {
	receipt: 'Receipt',
	invoice: 'Invoice',
	credit_note: 'Credit note'
} as const;

export const closedWords = {
	hold_lapsed: 'not paid in time',
	visitor: 'by the visitor',
	called_off: 'the visit was called off',
	no_places: 'the payment came when no places were left',
	box_office: 'by the box office'
} as const;
