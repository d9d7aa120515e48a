import pino from 'pino';

/** What an error says once everything is taken out of it that could be about a person. */
export interface PlainError {
	type: string;
	message: string;
	/** The code that the database, the network or the mail server gave, wherever it lay. */
	code?: string;
	stack?: string;
}

/**
 * Describes an error without personal data. A failed statement repeats its parameters, a mail server
 * the address it refuses: the one is cut off, the other blotted out, and causes give their code alone.
 */
export function plainError(thrown: unknown): PlainError {
	if (!(thrown instanceof Error)) return { type: typeof thrown, message: 'not an error' };
	const message = withoutPersons(thrown.message);
	const frames = /\n\s+at [\s\S]*$/.exec(thrown.stack ?? '')?.[0];
	const code = codeOf(thrown);
	return {
		type: thrown.name,
		message,
		...(code === undefined ? {} : { code }),
		...(frames === undefined ? {} : { stack: `${thrown.name}: ${message}${frames}` })
	};
}

function withoutPersons(text: string): string {
	return text
		.replace(/\s*params:[\s\S]*$/, '')
		.replaceAll(/[^\s@<>()[\]"',;:=]+@[^\s@<>()[\]"',;:=]+/g, '[address]');
}

function codeOf(thrown: Error): string | undefined {
	for (let at: unknown = thrown; at instanceof Error; at = at.cause) {
		const { code } = at as { code?: unknown };
		if (typeof code === 'string' || typeof code === 'number') return String(code);
	}
	return undefined;
}

/**
 * The process's log: JSON lines on standard output. No personal data goes into it: people appear by
 * id, request bodies and query strings never, errors as `plainError` has them.
 */
export const log = pino({
	level: process.env.LOG_LEVEL ?? 'info',
	base: undefined,
	timestamp: pino.stdTimeFunctions.isoTime,
	serializers: { err: plainError }
});
