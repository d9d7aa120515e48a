/**
 * A value as JSON with the keys of objects in order, so that what is stored and read back gives the same
 * text. Keys without a value are left out.
 */
export function canonicalJson(value: unknown): string {
	return JSON.stringify(value, (_, inner: unknown) =>
		inner && typeof inner === 'object' && !Array.isArray(inner)
			? Object.fromEntries(Object.entries(inner).sort(([a], [b]) => (a < b ? -1 : 1)))
			: inner
	);
}

/** Whether two plain values say the same. */
export const sameJson = (a: unknown, b: unknown): boolean => canonicalJson(a) === canonicalJson(b);
