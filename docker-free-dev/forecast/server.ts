import type http from 'node:http';
import { listen, sendJson, type DoubleRequest, type RunningDouble } from '../lib/http-double.ts';
import { answer, gridPoint } from './answer.ts';
import { hoursOf, readQuery, Refused } from './query.ts';
import { Scripts } from './scripts.ts';
import { dayAt } from './sky.ts';

/**
 * Starts the double of the forecast service on loopback. It answers `GET /v1/forecast` in the form of
 * the public Open-Meteo service, with a sky that is invented for each place and day and always the
 * same; beside it, `/_double/sky` lays other skies down and `/_double/reset` forgets them.
 */
export async function startForecastDouble(options: { port: number }): Promise<RunningDouble> {
	const scripts = new Scripts();
	const held = new Set<NodeJS.Timeout>();
	const running = await listen(options.port, (request, response) => {
		if (request.path.startsWith('/_double/')) return admin(request, response, scripts);
		if (request.path !== '/v1/forecast') {
			return sendJson(response, 404, { error: true, reason: 'Not Found' });
		}
		if (request.method !== 'GET') {
			return sendJson(response, 405, { error: true, reason: 'Method Not Allowed' });
		}
		return forecast(request, response, scripts, held);
	});
	return {
		address: running.address,
		close: () => {
			for (const timer of held) clearTimeout(timer);
			return running.close();
		}
	};
}

function forecast(
	request: DoubleRequest,
	response: http.ServerResponse,
	scripts: Scripts,
	held: Set<NodeJS.Timeout>
): void {
	let query;
	try {
		query = readQuery(request.query, Date.now());
	} catch (error) {
		if (!(error instanceof Refused)) throw error;
		return sendJson(response, 400, { error: true, reason: error.message });
	}
	const { latitude, longitude } = gridPoint(query);
	const days = [...new Set(hoursOf(query).map((at) => dayAt(at, longitude)))];
	const failure = scripts.failure(days, latitude, longitude);
	const body = answer(query, scripts);
	if (failure?.sky === 'outage') {
		// What stands in front of the service answers then, and not in JSON.
		response.writeHead(502, { 'content-type': 'text/html' });
		response.end('<html><head><title>502 Bad Gateway</title></head></html>\n');
	} else if (failure) {
		const timer = setTimeout(() => {
			held.delete(timer);
			sendJson(response, 200, body);
		}, failure.delayMs);
		held.add(timer);
		response.once('close', () => {
			clearTimeout(timer);
			held.delete(timer);
		});
	} else sendJson(response, 200, body);
}

function admin(request: DoubleRequest, response: http.ServerResponse, scripts: Scripts): void {
	switch (`${request.method} ${request.path}`) {
		case 'GET /_double/health':
			return sendJson(response, 200, { ok: true });
		case 'GET /_double/sky':
			return sendJson(response, 200, scripts.list);
		case 'POST /_double/sky':
			try {
				scripts.add(JSON.parse(request.body));
			} catch (error) {
				return sendJson(response, 400, {
					error: true,
					reason: error instanceof Error ? error.message : String(error)
				});
			}
			return sendJson(response, 200, scripts.list);
		case 'POST /_double/reset':
			scripts.clear();
			return sendJson(response, 200, scripts.list);
		default:
			return sendJson(response, 404, { error: true, reason: 'Not Found' });
	}
}
