import { createHmac } from 'node:crypto';
import type { Faults } from './faults.ts';
import type { Delivery, Row, Store } from './store.ts';

const FIRST_WAIT_MS = 1_000;
const LONGEST_WAIT_MS = 60_000;
const GIVE_UP_AFTER_MS = 3 * 24 * 60 * 60 * 1000;
const ANSWER_WITHIN_MS = 10_000;
/** How long a lone event is held back so that others overtake it. */
const OVERTAKE_MS = 1_000;

/** Where events go and how they are signed. */
export interface WebhookTarget {
	url?: string;
	secret?: string;
}

/** Sends events to the webhook address, signed, again and again until each was taken. */
export class Webhooks {
	target: WebhookTarget;
	#store: Store;
	#faults: Faults;
	#taken = new Set<string>();
	#running = new Set<Promise<void>>();
	#timer: NodeJS.Timeout | undefined;
	#stopped = false;

	constructor(store: Store, faults: Faults, target: WebhookTarget) {
		this.#store = store;
		this.#faults = faults;
		this.target = target;
	}

	/** How many events are still on their way. */
	get pending(): number {
		return this.#store.table('delivery').size;
	}

	/** Sends what is due. The new events of one act go out one after the other, in their order. */
	wake(now = Date.now()): void {
		if (this.#stopped) return;
		clearTimeout(this.#timer);
		const waiting = [...this.#store.table('delivery').values()].filter(
			(row) => !this.#taken.has(row.id)
		);
		const due = waiting.filter((row) => row.value.dueAtMs <= now).sort((a, b) => a.order - b.order);
		const fresh = due.filter((row) => row.value.attempts === 0);
		if (fresh.length > 0) this.#run(this.#sendFresh(fresh));
		for (const row of due.filter((one) => one.value.attempts > 0)) this.#run(this.#send(row));
		const next = Math.min(
			...waiting.filter((row) => row.value.dueAtMs > now).map((row) => row.value.dueAtMs)
		);
		if (Number.isFinite(next)) {
			this.#timer = setTimeout(() => this.wake(), Math.min(next - now, 2 ** 30));
		}
	}

	/** Tries everything that is still on its way once more, now; answers when each was tried. */
	async flush(): Promise<void> {
		this.wake(Number.MAX_SAFE_INTEGER);
		await Promise.all(this.#running);
	}

	async stop(): Promise<void> {
		this.#stopped = true;
		clearTimeout(this.#timer);
		await Promise.race([
			Promise.all(this.#running),
			new Promise((resolve) => setTimeout(resolve, 2_000).unref())
		]);
	}

	#run(work: Promise<void>): void {
		const tracked = work
			.catch((error: unknown) => console.error(error))
			.finally(() => this.#running.delete(tracked));
		this.#running.add(tracked);
	}

	async #sendFresh(rows: Row<'delivery'>[]): Promise<void> {
		for (const row of rows) this.#taken.add(row.id);
		const causes = [...new Set(rows.flatMap((row) => row.value.causes))];
		const twice = this.#faults.forEvents('duplicate-webhook', causes) !== undefined;
		const order = [...rows];
		if (this.#faults.forEvents('reorder-webhooks', causes)) {
			order.reverse();
			if (order.length === 1) await new Promise((resolve) => setTimeout(resolve, OVERTAKE_MS));
		}
		for (const row of order) {
			if (twice) await this.#post(row.value);
			await this.#send(row);
		}
	}

	async #send(row: Row<'delivery'>): Promise<void> {
		this.#taken.add(row.id);
		const accepted = await this.#post(row.value);
		if (this.#stopped && !accepted) return;
		const tx = this.#store.begin();
		const event = tx.row('event', row.id);
		const tooOld = Date.now() - (event?.value.created ?? 0) * 1000 > GIVE_UP_AFTER_MS;
		if (accepted || tooOld || !event) {
			tx.remove('delivery', row.id);
			if (event && accepted) {
				tx.put('event', event.owner, row.id, { ...event.value, pending_webhooks: 0 });
			}
		} else {
			const attempts = row.value.attempts + 1;
			const wait = Math.min(FIRST_WAIT_MS * 2 ** (attempts - 1), LONGEST_WAIT_MS);
			tx.put('delivery', row.owner, row.id, {
				...row.value,
				attempts,
				dueAtMs: Date.now() + wait
			});
		}
		tx.commit();
		this.#taken.delete(row.id);
		this.wake();
	}

	/** One try; true when the address answered with a status in the two hundreds. */
	async #post(delivery: Delivery): Promise<boolean> {
		const { url, secret } = this.target;
		// Nobody listens: as with the real service, the event is kept and goes nowhere.
		if (!url) return true;
		const event = this.#store.table('event').get(delivery.event)?.value;
		if (!event) return true;
		const payload = JSON.stringify(event, null, 2);
		try {
			const response = await fetch(url, {
				method: 'POST',
				redirect: 'manual',
				headers: {
					'content-type': 'application/json; charset=utf-8',
					'user-agent': 'Payment-double/1.0',
					'stripe-signature': sign(payload, secret ?? '', Math.floor(Date.now() / 1000))
				},
				body: payload,
				signal: AbortSignal.timeout(ANSWER_WITHIN_MS)
			});
			await response.arrayBuffer();
			return response.ok;
		} catch {
			return false;
		}
	}
}

/** The signature header: the moment, and the keyed digest of moment and body. */
export function sign(payload: string, secret: string, timestamp: number): string {
	const digest = createHmac('sha256', secret).update(`${timestamp}.${payload}`).digest('hex');
	return `t=${timestamp},v1=${digest}`;
}
