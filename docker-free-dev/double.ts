import { parseArgs } from 'node:util';
import { startForecastDouble } from './forecast/server.ts';
import { startPaymentDouble } from './payments/server.ts';

const USAGE = `Usage:
  npm run --silent double -- payments --port N --state DIR
  npm run --silent double -- forecast --port N

payments reads PAYMENT_WEBHOOK_URL and PAYMENT_WEBHOOK_SECRET (where its webhooks go and how they are
signed) and PAYMENT_SECRET_KEY (absent: any key that begins with sk_test_).`;

/** Refuses the command line: says why and how it is meant. */
function refuse(why: string): never {
	console.error(`${why}\n\n${USAGE}`);
	process.exit(2);
}

function readFlags() {
	try {
		return parseArgs({
			allowPositionals: true,
			options: { port: { type: 'string' }, state: { type: 'string' }, help: { type: 'boolean' } }
		});
	} catch (error) {
		return refuse(error instanceof Error ? error.message : String(error));
	}
}

const { values, positionals } = readFlags();
if (values.help) {
	console.log(USAGE);
	process.exit(0);
}
const [kind, ...more] = positionals;
if (kind !== 'payments' && kind !== 'forecast') {
	refuse(kind ? `There is no double called ${kind}.` : 'Which double? payments or forecast.');
}
if (more.length > 0) refuse(`Unexpected: ${more.join(' ')}`);
const port = Number(values.port);
if (!values.port || !Number.isInteger(port) || port < 0 || port > 65_535) {
	refuse('--port takes a port number, 0 to 65535 (0: any free one).');
}
if (kind === 'payments' && !values.state) refuse('payments needs --state, a folder of its own.');
if (kind === 'forecast' && values.state) refuse('forecast keeps no state: leave --state out.');

const server = await (
	kind === 'payments'
		? startPaymentDouble({
				port,
				stateDir: values.state ?? '',
				secretKey: process.env.PAYMENT_SECRET_KEY,
				webhookUrl: process.env.PAYMENT_WEBHOOK_URL,
				webhookSecret: process.env.PAYMENT_WEBHOOK_SECRET
			})
		: startForecastDouble({ port })
).catch((error: NodeJS.ErrnoException) => {
	const taken = error.code === 'EADDRINUSE' ? `Port ${port} is taken.` : error.message;
	console.error(taken);
	process.exit(1);
});
console.log(`${kind} double on ${server.address}`);

for (const signal of ['SIGINT', 'SIGTERM'] as const) {
	process.once(signal, () => void server.close().then(() => process.exit(0)));
}
