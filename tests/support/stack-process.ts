import { readFileSync } from 'node:fs';
import path from 'node:path';
import { startTestStack } from '../../docker-free-dev/test-stack.ts';

/**
 * A stack as a process of its own, for tests that kill the process that holds it. It writes one line of
 * JSON once everything is up: folders and process ids.
 */
const stack = await startTestStack(true, { demo: false });
const services = [
	stack.database,
	stack.mail,
	stack.payments,
	stack.forecast,
	stack.worker,
	stack.web
];
// The data folder is named by the server's own arguments.
const args = readFileSync(`/proc/${stack.database.pid()}/cmdline`, 'utf8').split('\0');
console.log(
	JSON.stringify({
		folders: [stack.home, path.dirname(args[args.indexOf('-D') + 1] ?? '')],
		pids: services.map((service) => service?.pid()),
		origin: stack.origin
	})
);
// Stays until somebody ends it.
setInterval(() => {}, 60_000);
