import { mkdtempSync, rmSync } from 'node:fs';
import http from 'node:http';
import os from 'node:os';
import path from 'node:path';
import Stripe from 'stripe';
import { startPaymentDouble } from '../../../docker-free-dev/payments/server.ts';

export const SECRET = 'whsec_of_the_test';

export interface Received {
	event: Stripe.Event;
	/** Seconds since the epoch. */
	at: number;
}

/** A shop that takes webhooks, checks each signature and answers as it is told. */
export async function startReceiver() {
	const received: Received[] = [];
	const refused: string[] = [];
	let status = 200;
	const waiting: { fits: (events: Stripe.Event[]) => boolean; done: () => void }[] = [];
	const server = http.createServer((request, response) => {
		const chunks: Buffer[] = [];
		request.on('data', (chunk: Buffer) => chunks.push(chunk));
		request.on('end', () => {
			// A stray call to a port that was somebody else's before is not ours to judge.
			if (request.url !== '/webhook') return response.writeHead(404).end();
			const body = Buffer.concat(chunks).toString();
			const signature = String(request.headers['stripe-signature']);
			const event = Stripe.webhooks.constructEvent(body, signature, SECRET);
			if (status === 200) received.push({ event, at: Date.now() / 1000 });
			else refused.push(event.id);
			response.writeHead(status).end();
			for (const one of waiting) if (one.fits(received.map((r) => r.event))) one.done();
		});
	});
	await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
	const address = server.address();
	const port = typeof address === 'object' && address ? address.port : 0;
	return {
		url: `http://127.0.0.1:${port}/webhook`,
		received,
		refused,
		types: () => received.map(({ event }) => event.type as string),
		answer: (next: number) => {
			status = next;
		},
		/** Waits until what arrived so far fits. */
		until: (fits: (events: Stripe.Event[]) => boolean) =>
			new Promise<void>((resolve) => {
				if (fits(received.map((r) => r.event))) resolve();
				else waiting.push({ fits, done: resolve });
			}),
		close: () =>
			new Promise<void>((resolve) => {
				server.close(() => resolve());
				server.closeAllConnections();
			})
	};
}

/** A client of the real SDK that talks to a double. */
export function clientFor(address: string, more: Stripe.StripeConfig = {}): Stripe {
	const { hostname, port } = new URL(address);
	return new Stripe('sk_test_of_the_test', {
		host: hostname,
		port: Number(port),
		protocol: 'http',
		maxNetworkRetries: 0,
		telemetry: false,
		...more
	});
}

/** A double with a shop that hears its webhooks, and a client. */
export async function startWorld() {
	const stateDir = mkdtempSync(path.join(os.tmpdir(), 'payment-double-'));
	const shop = await startReceiver();
	const double = await startPaymentDouble({
		port: 0,
		stateDir,
		webhookUrl: shop.url,
		webhookSecret: SECRET,
		// "Later" comes when a test says so.
		laterMs: 3_600_000
	});
	const stripe = clientFor(double.address);
	return {
		shop,
		stripe,
		address: double.address,
		client: (more: Stripe.StripeConfig) => clientFor(double.address, more),
		/** Calls a helper beside the API. */
		helper: async (method: string, name: string, body?: unknown) => {
			const response = await fetch(`${double.address}/_double/${name}`, {
				method,
				body: body === undefined ? undefined : JSON.stringify(body)
			});
			return { status: response.status, body: (await response.json()) as Record<string, unknown> };
		},
		/** A completed account of an operator. */
		account: async () => {
			const account = await stripe.accounts.create({ type: 'express', country: 'DE' });
			await fetch(`${double.address}/_double/accounts/${account.id}/complete`, { method: 'POST' });
			return account.id;
		},
		stop: async () => {
			await double.close();
			await shop.close();
			rmSync(stateDir, { recursive: true, force: true });
		}
	};
}

export type World = Awaited<ReturnType<typeof startWorld>>;

/** What a shop asks for: one line of places. */
export function order(
	amountMinor: number,
	more: Partial<Stripe.Checkout.SessionCreateParams> = {}
): Stripe.Checkout.SessionCreateParams {
	return {
		mode: 'payment',
		success_url: 'http://127.0.0.1:9/done?session={CHECKOUT_SESSION_ID}',
		cancel_url: 'http://127.0.0.1:9/back',
		customer_email: 'visitor@example.test',
		line_items: [
			{
				quantity: 1,
				price_data: {
					currency: 'eur',
					unit_amount: amountMinor,
					product_data: { name: 'Places at 08:10' }
				}
			}
		],
		...more
	};
}

/** The error that a promise is refused with. */
export async function errorOf(promise: Promise<unknown>): Promise<Stripe.errors.StripeError> {
	try {
		await promise;
	} catch (error) {
		if (error instanceof Stripe.errors.StripeError) return error;
		throw error;
	}
	throw new Error('It was not refused.');
}
