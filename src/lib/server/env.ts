import { z } from 'zod';

/**
 * The environment, read and checked once. Every process (web, worker, command line) imports this
 * module; a wrong environment stops the start and names every fault.
 */
const url = (protocols: string[]) =>
	z.string().refine(
		(value) => {
			try {
				return protocols.includes(new URL(value).protocol);
			} catch {
				return false;
			}
		},
		{ message: `must be a URL with ${protocols.join(' or ')}` }
	);

const schema = z.object({
	/** PostgreSQL as `bowkeeper_app`: no table owner, does not bypass row-level security. */
	DATABASE_URL: url(['postgres:', 'postgresql:']),
	/** PostgreSQL as `bowkeeper_queue`, which owns the queue's own schema alone (worker, migrations). */
	DATABASE_QUEUE_URL: url(['postgres:', 'postgresql:']).optional(),
	/** PostgreSQL as `bowkeeper_owner`, who owns the tables (migrations only). */
	DATABASE_OWNER_URL: url(['postgres:', 'postgresql:']).optional(),
	/** Public address of the web server, without a path. */
	ORIGIN: url(['http:', 'https:']).refine(
		(value) => !URL.canParse(value) || new URL(value).origin === value,
		{ message: 'must be scheme, host and port alone, without a path or a slash at the end' }
	),
	/** 32 bytes in base64: seals second-step secrets at rest. */
	SECRET_KEY: z.string().refine((value) => Buffer.from(value, 'base64').length === 32, {
		message: 'must be 32 bytes in base64'
	}),
	SMTP_URL: url(['smtp:', 'smtps:']),
	MAIL_FROM: z.string().min(3),
	/** Absent: the payment service's own address. */
	PAYMENT_API_URL: url(['http:', 'https:']).optional(),
	PAYMENT_SECRET_KEY: z.string().min(8),
	PAYMENT_WEBHOOK_SECRET: z.string().min(8),
	FORECAST_API_URL: url(['http:', 'https:']),
	/** Folder for uploaded pictures. */
	FILES_DIR: z.string().min(1),
	/** Bearer token that reads /metrics; absent: only loopback may read it. */
	METRICS_TOKEN: z.string().min(16).optional(),
	LOG_LEVEL: z.enum(['fatal', 'error', 'warn', 'info', 'debug', 'silent']).default('info')
});

export type Env = z.infer<typeof schema>;

/**
 * Checks a set of environment variables.
 * @throws Error whose message names every fault, one a line.
 */
export function parseEnv(source: Record<string, string | undefined>): Env {
	const result = schema.safeParse(source);
	if (result.success) return result.data;
	const faults = result.error.issues.map((issue) => {
		const name = issue.path.join('.');
		return `  ${name}: ${source[name] === undefined ? 'is missing' : issue.message}`;
	});
	throw new Error(`The environment is not usable:\n${faults.join('\n')}`);
}

let cached: Env | undefined;

/** The checked environment of this process. */
export function env(): Env {
	cached ??= parseEnv(process.env);
	return cached;
}
