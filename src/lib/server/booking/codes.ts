import { randomInt } from 'node:crypto';

/** Digits and letters that are not taken for one another when read aloud or copied by hand. */
const alphabet = '23456789ABCDEFGHJKMNPQRSTVWXYZ';

function letters(count: number): string {
	return Array.from({ length: count }, () => alphabet[randomInt(alphabet.length)]).join('');
}

/** A ticket's code: 16 signs of 30, 78 bits, unguessable. */
export const newTicketCode = (): string => letters(16);

/** An order's reference, for talking about it; grants nothing. */
export const newReference = (): string => letters(8);

/** A code in groups of four, as it is printed. */
export function groupedCode(code: string): string {
	return code.replaceAll(/(.{4})(?=.)/g, '$1-');
}

/**
 * A code as it was typed or scanned, brought to the stored form: case, spaces and hyphens do not
 * matter, nor do the letters that the alphabet leaves out because they look like one of its own.
 * @returns null when it can not be a ticket's code
 */
export function readTicketCode(typed: string): string | null {
	const code = typed
		.toUpperCase()
		.replaceAll(/[\s-]/g, '')
		.replaceAll('U', 'V')
		.replaceAll(/[IL]/g, 'J');
	return code.length === 16 && [...code].every((sign) => alphabet.includes(sign)) ? code : null;
}
