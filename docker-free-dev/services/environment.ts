import { LOOPBACK, type Ports } from '../lib/ports.ts';
import type { Secrets } from '../lib/secrets.ts';
import type { PostgresService } from './postgres.ts';

/** The settings of every process of ours, by name, as `src/lib/server/env.ts` reads them. */
export type Environment = Record<string, string>;

/** The little that any process needs of the surroundings; nothing else is handed on. */
export function baseEnvironment(): Environment {
	const kept = ['PATH', 'HOME', 'TMPDIR', 'LANG', 'LC_ALL', 'TERM', 'CI', 'NO_COLOR'];
	const entries = kept.flatMap((name) => {
		const value = process.env[name];
		return value === undefined ? [] : [[name, value] as const];
	});
	return Object.fromEntries(entries);
}

export interface EnvironmentParts {
	ports: Ports;
	secrets: Secrets;
	urls: PostgresService['urls'];
	filesDir: string;
	logLevel: string;
}

export interface Environments {
	/** Web: as the plain application role alone. */
	web: Environment;
	/** Worker: also as the owner of the queue. */
	worker: Environment;
	/** Command line (migrations, demo): also as the owner of the tables. */
	tools: Environment;
}

/** The public address of the web server. */
export function originOf(ports: Ports): string {
	return `http://${LOOPBACK}:${ports.web}`;
}

/** The environment of each of our processes, with no more rights than it needs. */
export function environments(parts: EnvironmentParts): Environments {
	const { ports, secrets, urls } = parts;
	const web: Environment = {
		...baseEnvironment(),
		DATABASE_URL: urls.app,
		ORIGIN: originOf(ports),
		SECRET_KEY: secrets.secretKey,
		SMTP_URL: `smtp://${LOOPBACK}:${ports.smtp}`,
		MAIL_FROM: 'Bowkeeper <letters@bowkeeper.test>',
		PAYMENT_API_URL: `http://${LOOPBACK}:${ports.payments}`,
		PAYMENT_SECRET_KEY: secrets.paymentSecretKey,
		PAYMENT_WEBHOOK_SECRET: secrets.paymentWebhookSecret,
		FORECAST_API_URL: `http://${LOOPBACK}:${ports.forecast}`,
		FILES_DIR: parts.filesDir,
		LOG_LEVEL: parts.logLevel
	};
	const worker = { ...web, DATABASE_QUEUE_URL: urls.queue };
	const tools = { ...worker, DATABASE_OWNER_URL: urls.owner };
	return { web, worker, tools };
}
