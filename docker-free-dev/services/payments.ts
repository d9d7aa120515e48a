import type { Guard } from '../lib/guard.ts';
import type { Secrets } from '../lib/secrets.ts';
import type { Service } from '../lib/supervise.ts';
import { startDouble } from './double.ts';

export interface PaymentsOptions {
	port: number;
	/** Folder of its journal. */
	stateDir: string;
	/** Where its webhooks go. */
	webhookUrl: string;
	secrets: Pick<Secrets, 'paymentSecretKey' | 'paymentWebhookSecret'>;
	logsDir: string;
	guard: Guard;
	notice?: (line: string) => void;
}

/** Starts the double of the payment service. */
export function startPayments(options: PaymentsOptions): Promise<Service> {
	const { port, stateDir, webhookUrl, secrets, logsDir, guard, notice } = options;
	return startDouble({
		kind: 'payments',
		port,
		args: ['--state', stateDir],
		env: {
			PAYMENT_WEBHOOK_URL: webhookUrl,
			PAYMENT_WEBHOOK_SECRET: secrets.paymentWebhookSecret,
			PAYMENT_SECRET_KEY: secrets.paymentSecretKey
		},
		logsDir,
		guard,
		notice
	});
}
