import http from 'node:http';
import { LOOPBACK } from './ports.ts';

/** A double that is listening. */
export interface RunningDouble {
	address: string;
	close(): Promise<void>;
}

/** A request with its body read. */
export interface DoubleRequest {
	method: string;
	path: string;
	query: string;
	body: string;
	headers: http.IncomingHttpHeaders;
}

const LONGEST_BODY = 1_000_000;

/** Listens on loopback; `handle` answers each request. Its failures are written down and answered 500. */
export async function listen(
	port: number,
	handle: (request: DoubleRequest, response: http.ServerResponse) => Promise<void> | void
): Promise<RunningDouble> {
	const server = http.createServer((incoming, response) => {
		void (async () => {
			try {
				const body = await readBody(incoming);
				const target = incoming.url ?? '/';
				const cut = target.indexOf('?');
				await handle(
					{
						method: incoming.method ?? 'GET',
						path: cut < 0 ? target : target.slice(0, cut),
						query: cut < 0 ? '' : target.slice(cut + 1),
						body,
						headers: incoming.headers
					},
					response
				);
			} catch (error) {
				console.error(error);
				if (!response.headersSent) response.writeHead(500);
				response.end();
			}
		})();
	});
	// Longer than clients keep a line in hand, so that none is cut just as it is used again.
	server.keepAliveTimeout = 75_000;
	await new Promise<void>((resolve, reject) => {
		server.once('error', reject);
		server.listen(port, LOOPBACK, resolve);
	});
	const address = server.address();
	const actual = typeof address === 'object' && address ? address.port : port;
	return {
		address: `http://${LOOPBACK}:${actual}`,
		close: () =>
			new Promise((resolve) => {
				server.close(() => resolve());
				server.closeIdleConnections();
				setTimeout(() => server.closeAllConnections(), 1_000).unref();
			})
	};
}

/** Answers with JSON. */
export function sendJson(response: http.ServerResponse, status: number, body: unknown): void {
	response.writeHead(status, { 'content-type': 'application/json' });
	response.end(JSON.stringify(body, null, 2));
}

async function readBody(incoming: http.IncomingMessage): Promise<string> {
	const chunks: Buffer[] = [];
	let size = 0;
	for await (const chunk of incoming as AsyncIterable<Buffer>) {
		size += chunk.length;
		if (size > LONGEST_BODY) throw new Error('A request of more than a megabyte.');
		chunks.push(chunk);
	}
	return Buffer.concat(chunks).toString();
}
