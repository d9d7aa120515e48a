import pino from 'pino';

/**
 * The process's log: JSON lines on standard output. No personal data goes into it: people appear by
 * id, request bodies and query strings never.
 */
export const log = pino({
	level: process.env.LOG_LEVEL ?? 'info',
	base: undefined,
	timestamp: pino.stdTimeFunctions.isoTime
});
