import { createCipheriv, createDecipheriv, randomBytes } from 'node:crypto';
import { env } from '../env';

const algorithm = 'aes-256-gcm';

const key = () => Buffer.from(env().SECRET_KEY, 'base64');

/** Encrypts a secret for the database (AES-256-GCM under SECRET_KEY). */
export function seal(secret: string): string {
	const iv = randomBytes(12);
	const cipher = createCipheriv(algorithm, key(), iv);
	const sealed = Buffer.concat([cipher.update(secret, 'utf8'), cipher.final()]);
	return Buffer.concat([iv, cipher.getAuthTag(), sealed]).toString('base64');
}

/**
 * The secret that was sealed.
 * @throws when it was sealed under another key or changed since
 */
export function unseal(sealed: string): string {
	const bytes = Buffer.from(sealed, 'base64');
	const decipher = createDecipheriv(algorithm, key(), bytes.subarray(0, 12));
	decipher.setAuthTag(bytes.subarray(12, 28));
	return Buffer.concat([decipher.update(bytes.subarray(28)), decipher.final()]).toString('utf8');
}
