import { hash, verify } from '@node-rs/argon2';

/** argon2id with the least cost that OWASP's password storage cheat sheet gives: 19 MiB, 2 passes. */
const cost = { memoryCost: 19_456, timeCost: 2, parallelism: 1 };

export function hashPassword(password: string): Promise<string> {
	return hash(password.normalize('NFKC'), cost);
}

let noAccount: Promise<string> | undefined;

/**
 * Whether the password fits. Without a stored hash (no such account) the same work is done and the
 * answer is no, so that the time taken tells nothing.
 */
export async function passwordFits(stored: string | null, password: string): Promise<boolean> {
	noAccount ??= hashPassword('no account has this password');
	const fits = await verify(stored ?? (await noAccount), password.normalize('NFKC'));
	return stored !== null && fits;
}
