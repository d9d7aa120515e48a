import Stripe from 'stripe';
import { env } from '../../env';

let client: Stripe | undefined;

/** The service's client. A double on loopback is reached by the environment alone. */
export function service(): Stripe {
	if (!client) {
		const { PAYMENT_API_URL, PAYMENT_SECRET_KEY } = env();
		const url = PAYMENT_API_URL ? new URL(PAYMENT_API_URL) : null;
		client = new Stripe(PAYMENT_SECRET_KEY, {
			maxNetworkRetries: 2,
			timeout: 20_000,
			telemetry: false,
			...(url && {
				protocol: url.protocol === 'https:' ? ('https' as const) : ('http' as const),
				host: url.hostname,
				...(url.port ? { port: Number(url.port) } : {})
			})
		});
	}
	return client;
}

/** The service refused for good: the same request would be refused again. */
export class PaymentRefused extends Error {
	override readonly name = 'PaymentRefused';
	constructor(
		message: string,
		/** The service's code, such as `charge_already_refunded`. */
		readonly code: string | null
	) {
		super(message);
	}
}

/** Runs a call; a refusal for good becomes PaymentRefused, all else (network, 429, 5xx) is thrown on. */
export async function ask<T>(call: Promise<T>): Promise<T> {
	try {
		return await call;
	} catch (error) {
		if (
			error instanceof Stripe.errors.StripeInvalidRequestError ||
			error instanceof Stripe.errors.StripeCardError
		) {
			throw new PaymentRefused(error.message, error.code ?? null);
		}
		throw error;
	}
}
