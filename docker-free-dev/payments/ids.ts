import { randomBytes } from 'node:crypto';

const ALPHABET = '0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz';

/** A new id in the service's manner: a prefix that tells the kind, then letters and digits. */
export function newId(prefix: string, length = 24): string {
	let letters = '';
	while (letters.length < length) {
		for (const byte of randomBytes(length)) {
			// 248 is the largest multiple of 62 in a byte: beyond it the letters would not be even.
			if (byte < 248 && letters.length < length) letters += ALPHABET[byte % 62];
		}
	}
	return `${prefix}_${letters}`;
}
