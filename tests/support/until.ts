/**
 * Asks until the answer is one, and gives it back. For what happens in another process and can only be
 * looked at.
 * @throws Error that tells the last thing seen when it takes too long
 */
export async function until<T>(
	what: string,
	look: () => Promise<T | null | undefined | false>,
	withinMs = 20_000
): Promise<T> {
	const end = Date.now() + withinMs;
	let last: unknown;
	while (Date.now() < end) {
		try {
			const found = await look();
			if (found) return found;
			last = found;
		} catch (error) {
			last = error;
		}
		await new Promise((resolve) => setTimeout(resolve, 50));
	}
	throw new Error(`${what} did not come within ${withinMs} ms; last seen: ${String(last)}`);
}
