import http from 'node:http';
import type { RunningDouble } from '../lib/http-double.ts';

/** Starts the double of the forecast service on loopback. */
export async function startForecastDouble(options: { port: number }): Promise<RunningDouble> {
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
