import { createHash, randomBytes } from 'node:crypto';

/** SHA-256 in base64url: how tokens and session ids lie in the database. */
export function hashToken(token: string): string {
	return createHash('sha256').update(token).digest('base64url');
}

/** A new unguessable token (256 bits) for a link, and the hash to store in its place. */
export function newToken(): { token: string; hash: string } {
	const token = randomBytes(32).toString('base64url');
	return { token, hash: hashToken(token) };
}
