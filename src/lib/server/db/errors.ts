/** PostgreSQL's own words about a failed statement, wherever the driver put them. */
export interface DatabaseFault {
	code: string;
	constraint: string | undefined;
}

/** Reads code and constraint from an error of the driver or of Drizzle (which wraps it); else null. */
export function databaseFault(error: unknown): DatabaseFault | null {
	for (let at: unknown = error; at instanceof Error; at = at.cause) {
		const { code, constraint } = at as { code?: unknown; constraint?: unknown };
		if (typeof code === 'string' && /^[0-9A-Z]{5}$/.test(code)) {
			return { code, constraint: typeof constraint === 'string' ? constraint : undefined };
		}
	}
	return null;
}

/** True when the error says that the named constraint refused the row. */
export function violates(error: unknown, constraint: string): boolean {
	return databaseFault(error)?.constraint === constraint;
}
