/** One measured number. */
export interface Measure {
	readonly name: string;
	readonly value: number;
	readonly unit: string;
}

/** A part of the bench: one file a section, listed in index.ts. */
export interface Section {
	/** What `--only` asks for. */
	readonly name: string;
	/** Measures, in the order in which they are printed. */
	run(): Measure[] | Promise<Measure[]>;
}

/** Milliseconds that a call takes. */
export function timeMs(call: () => unknown): number {
	const startMs = performance.now();
	kept = call();
	return performance.now() - startMs;
}

/** The last answer: one that nobody reads might not be worked out at all. */
let kept: unknown = null;
export const lastAnswer = (): unknown => kept;

/** The middle value, the mean of the middle two for an even count. */
export function median(values: readonly number[]): number {
	const sorted = [...values].sort((a, b) => a - b);
	const middle = sorted.length >> 1;
	return sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}

/**
 * Median milliseconds of several calls, measured in turn, so that a machine that is slow for a while is
 * slow for all of them.
 * @param repeats rounds that count, after one that does not (the code is warm then)
 */
export function medianTimesMs<Name extends string>(
	calls: Record<Name, () => unknown>,
	repeats: number
): Record<Name, number> & { ratios(name: Name, to: Name): number } {
	const names = Object.keys(calls) as Name[];
	const times = Object.fromEntries(names.map((name) => [name, [] as number[]])) as Record<
		Name,
		number[]
	>;
	for (let round = 0; round <= repeats; round++) {
		for (const name of names) {
			const ms = timeMs(calls[name]);
			if (round > 0) times[name].push(ms);
		}
	}
	const medians = Object.fromEntries(names.map((name) => [name, median(times[name])])) as Record<
		Name,
		number
	>;
	return {
		...medians,
		/** Median over the rounds of one call's time over another's in the same round. */
		ratios: (name: Name, to: Name) => median(times[name].map((ms, i) => ms / times[to][i]!))
	};
}
