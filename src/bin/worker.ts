import { closePool } from '../lib/server/db/client';
import { env } from '../lib/server/env';
import { log } from '../lib/server/log';
import { startWorker } from '../lib/server/jobs/worker';

/** The worker process: runs jobs until SIGTERM or SIGINT, or until its database is gone. */
try {
	env();
	const worker = await startWorker();
	const stop = (signal: string) => {
		log.info({ signal }, 'worker stopping');
		void worker.stop();
	};
	process.once('SIGTERM', stop);
	process.once('SIGINT', stop);
	await worker.ended;
	await closePool();
	log.info('worker stopped');
	process.exit(0);
} catch (error) {
	log.fatal({ err: error }, 'worker ended');
	process.exit(1);
}
