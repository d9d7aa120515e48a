import { listen, sendJson, type RunningDouble } from '../lib/http-double.ts';
import { handleAdmin } from './admin.ts';
import { Api } from './api.ts';
import { Engine } from './engine.ts';
import { handlePage } from './pages/handle.ts';

export interface PaymentDoubleOptions {
	/** 0: any free port. */
	port: number;
	/** Folder of the journal, which survives kills. */
	stateDir: string;
	/** The one key that is taken; absent: any that begins with sk_test_. */
	secretKey?: string;
	webhookUrl?: string;
	webhookSecret?: string;
	/** How long "later" is; three seconds unless told. */
	laterMs?: number;
}

/** Starts the double of the payment service on loopback. */
export async function startPaymentDouble(options: PaymentDoubleOptions): Promise<RunningDouble> {
	const engine = new Engine({ ...options, laterMs: options.laterMs ?? 3_000 });
	const api = new Api(engine, options.secretKey);
	const server = await listen(options.port, async (request, response) => {
		const { path } = request;
		if (path.startsWith('/v1/')) return api.handle(request, response);
		if (path.startsWith('/_double/')) return handleAdmin(engine, request, response);
		if (handlePage(engine, request, response)) return;
		sendJson(response, 404, { error: { message: `There is nothing at ${path}.` } });
	}).catch(async (error: unknown) => {
		await engine.stop();
		throw error;
	});
	engine.base = server.address;
	engine.resume();
	return {
		address: server.address,
		close: async () => {
			await server.close();
			await engine.stop();
		}
	};
}
