/** What may be made to go wrong. */
export const FAULTS = [
	'drop-after-commit',
	'500',
	'429',
	'delay',
	'duplicate-webhook',
	'reorder-webhooks'
] as const;

export type FaultName = (typeof FAULTS)[number];

export interface Fault {
	/** "METHOD /path" of a request ("*" or {name} for any segment), an event's type, or "*". */
	match: string;
	fault: FaultName;
	/** How often it still happens. */
	times: number;
	/** For a delay: how long. */
	ms?: number;
}

/** The faults that are laid in wait; they are forgotten at a restart. */
export class Faults {
	#waiting: Fault[] = [];

	/**
	 * Lays faults in wait, given as JSON.
	 * @throws Error that says what is wrong with the list; then none of it counts.
	 */
	add(given: unknown): void {
		const list = Array.isArray(given) ? given : [given];
		this.#waiting.push(...list.map(readFault));
	}

	clear(): void {
		this.#waiting = [];
	}

	get waiting(): readonly Fault[] {
		return this.#waiting;
	}

	/** Takes one of the faults that befall a request, if one waits for it. */
	forRequest(request: string): Fault | undefined {
		return this.#take(
			(one) => !one.fault.endsWith('webhook') && !one.fault.endsWith('webhooks'),
			[request]
		);
	}

	/** Takes a fault for webhooks, if one waits for any of the acts behind them. */
	forEvents(fault: FaultName, causes: string[]): Fault | undefined {
		return this.#take((one) => one.fault === fault, causes);
	}

	#take(fits: (fault: Fault) => boolean, acts: string[]): Fault | undefined {
		const found = this.#waiting.find(
			(one) => fits(one) && acts.some((act) => matches(one.match, act))
		);
		if (found) {
			found.times -= 1;
			this.#waiting = this.#waiting.filter((one) => one.times > 0);
		}
		return found;
	}
}

/** Whether a pattern stands for an act such as "POST /v1/refunds" or "charge.refunded". */
export function matches(pattern: string, act: string): boolean {
	if (pattern === '*') return true;
	const wanted = pattern.trim().split(/[\s/]+/);
	const given = act.split(/[\s/]+/);
	if (wanted.length !== given.length) return false;
	return wanted.every((part, index) => {
		if (part === '*' || /^\{.*\}$/.test(part) || part.startsWith(':')) return true;
		if (part.endsWith('.*')) return given[index]?.startsWith(part.slice(0, -1)) === true;
		return part === given[index];
	});
}

function readFault(given: unknown): Fault {
	if (typeof given !== 'object' || given === null) throw new Error('Each fault is an object.');
	const { match, fault, times = 1, ms } = given as Record<string, unknown>;
	if (typeof match !== 'string' || match === '') throw new Error('"match" is a text.');
	const name = FAULTS.find((one) => one === String(fault));
	if (!name) throw new Error(`"fault" is one of ${FAULTS.join(', ')}.`);
	if (typeof times !== 'number' || !Number.isInteger(times) || times < 1) {
		throw new Error('"times" is a whole number, at least 1.');
	}
	if (ms !== undefined && (typeof ms !== 'number' || ms < 0)) throw new Error('"ms" is a number.');
	return { match, fault: name, times, ...(ms === undefined ? {} : { ms }) };
}
