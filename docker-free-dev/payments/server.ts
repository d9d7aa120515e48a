import http from 'node:http';
import type { RunningDouble } from '../forecast/server.ts';

/** Starts the double of the payment service on loopback. */
export async function startPaymentDouble(options: {
	port: number;
	stateDir: string;
	secretKey?: string;
	webhookUrl?: string;
	webhookSecret?: string;
}): Promise<RunningDouble> {
	const server = http.createServer((request, response) => {
		response.writeHead(request.url === '/_double/health' ? 200 : 404).end();
	});
	await new Promise<void>((resolve, reject) => {
		server.once('error', reject);
		server.listen(options.port, '127.0.0.1', resolve);
	});
	const address = server.address();
	const port = typeof address === 'object' && address ? address.port : options.port;
	return {
		address: `http://127.0.0.1:${port}`,
		close: () =>
			new Promise((resolve) => {
				server.close(() => resolve());
				server.closeAllConnections();
			})
	};
}
