import { randomBytes } from 'node:crypto';
import { existsSync, readFileSync, renameSync, writeFileSync } from 'node:fs';

/** What is generated once for a checkout or a test run, and known to nobody else. */
export interface Secrets {
	superuserPassword: string;
	ownerPassword: string;
	appPassword: string;
	queuePassword: string;
	secretKey: string;
	paymentSecretKey: string;
	paymentWebhookSecret: string;
}

/** Fresh random secrets. */
export function newSecrets(): Secrets {
	const word = () => randomBytes(24).toString('base64url');
	return {
		superuserPassword: word(),
		ownerPassword: word(),
		appPassword: word(),
		queuePassword: word(),
		secretKey: randomBytes(32).toString('base64'),
		paymentSecretKey: `sk_test_${randomBytes(18).toString('hex')}`,
		paymentWebhookSecret: `whsec_${randomBytes(24).toString('hex')}`
	};
}

/** The secrets kept in `file`, made on first use; the owner of the checkout alone may read them. */
export function keptSecrets(file: string): Secrets {
	if (existsSync(file)) return JSON.parse(readFileSync(file, 'utf8')) as Secrets;
	const secrets = newSecrets();
	// Written aside and moved, so that a kill in between never leaves half a file.
	writeFileSync(`${file}.new`, JSON.stringify(secrets, null, '\t') + '\n', { mode: 0o600 });
	renameSync(`${file}.new`, file);
	return secrets;
}
