/** Waits for `ms` milliseconds. */
export function delay(ms: number): Promise<void> {
	return new Promise((resolve) => setTimeout(resolve, ms));
}

/** Whether a GET at `url` is answered, and with a status that `accept` likes. */
export async function answers(
	url: string,
	accept: (status: number) => boolean = (status) => status < 500
): Promise<boolean> {
	try {
		const response = await fetch(url, { redirect: 'manual', signal: AbortSignal.timeout(5_000) });
		await response.arrayBuffer();
		return accept(response.status);
	} catch {
		return false;
	}
}
