import { z } from 'zod';
import { emailField } from './people';

/** A number of places as a form sends it; empty counts as none. */
const quantity = z
	.string()
	.trim()
	.max(4, 'Give a whole number.')
	.refine((value) => /^\d*$/.test(value), 'Give a whole number.')
	.default('0');

/** What a visitor sends to hold places: two lists of one length, price categories and numbers. */
export const reserveSchema = z.object({
	/** Names the order and proves that this page gave the name. */
	orderId: z.uuid(),
	key: z.string().max(64),
	priceCategoryId: z.array(z.uuid()).max(30),
	quantity: z.array(quantity).max(30),
	visitorName: z
		.string()
		.trim()
		.min(1, 'Give your name.')
		.max(100, 'Use at most 100 characters.')
		.regex(/^[^\p{Cc}]*$/u, 'Use letters, digits and signs on one line.'),
	visitorEmail: emailField
});

export const cancelOrderSchema = z.object({
	inFull: z.boolean().default(false),
	words: z.string().trim().max(500, 'Use at most 500 characters.').default('')
});

/** What moves an order to another slot; the page gives the move its name. */
export const moveOrderSchema = z.object({
	moveId: z.uuid(),
	slotId: z.uuid('Choose a slot.'),
	wishedBy: z.enum(['visitor', 'operator']),
	words: z.string().trim().max(500, 'Use at most 500 characters.').default('')
});

export const refundIdSchema = z.object({ refundId: z.uuid() });

export const slotIdSchema = z.object({ slotId: z.uuid() });

export const gateSchema = z.object({
	slotId: z.uuid('Choose a slot.'),
	code: z.string().trim().min(1, 'Scan or type a code.').max(200, 'That is too long for a code.')
});

export const callOffSchema = z.object({
	slotId: z.array(z.uuid()).min(1, 'Choose at least one slot.').max(500),
	reason: z
		.string()
		.trim()
		.min(5, 'Say why, in a sentence that visitors will read.')
		.max(500, 'Use at most 500 characters.')
});
