import { z } from 'zod';
import { isHarsh } from '../conflict-deeds';

/** Most slots that one form decides on. */
export const mostDecisions = 100;

/** What a person chose for sold slots outside the windows: two lists of one length, and why. */
export const decideSchema = z
	.object({
		/** Names what was looked at, and the choices whose numbers were told. */
		digest: z.string().max(64),
		seen: z.string().max(20_000).default(''),
		slotId: z.array(z.uuid()).max(mostDecisions).default([]),
		choice: z
			.array(
				z
					.string()
					.regex(/^(later|keep|call_off|move:[0-9a-f-]{36})$/, 'Choose what becomes of the slot.')
			)
			.max(mostDecisions)
			.default([]),
		reason: z.string().trim().max(500, 'Use at most 500 characters.').default('')
	})
	.refine(({ slotId, choice }) => slotId.length === choice.length, {
		message: 'Choose for each slot.'
	})
	.refine(({ choice, reason }) => reason.length >= 5 || !choice.some(isHarsh), {
		message: 'Say why, in a sentence that visitors will read.',
		path: ['reason']
	});
