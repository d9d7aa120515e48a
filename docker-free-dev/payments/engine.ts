import Stripe from 'stripe';
import type { Call } from './call.ts';
import { Faults } from './faults.ts';
import { newId } from './ids.ts';
import { Journal } from './journal.ts';
import { openDispute } from './resources/disputes.ts';
import { platformAccount } from './resources/accounts.ts';
import { failRefund, settleRefund } from './resources/refunds.ts';
import { expireSession } from './resources/sessions.ts';
import { Store, type Task } from './store.ts';
import { Webhooks } from './webhooks.ts';

export interface EngineOptions {
	stateDir: string;
	webhookUrl?: string;
	webhookSecret?: string;
	/** How long "later" is for refunds that fail and charges that are disputed. */
	laterMs: number;
}

const ANSWERS_KEPT_MS = 24 * 60 * 60 * 1000;
const SWEEP_EVERY_MS = 10 * 60 * 1000;

/** By which act of an API client a task would be matched, for faults of webhooks. */
const TASK_CAUSES: Record<Task['what'], string> = {
	fail_refund: 'POST /v1/refunds',
	settle_refund: 'POST /v1/refunds',
	open_dispute: 'POST /v1/checkout/sessions',
	expire_session: 'POST /v1/checkout/sessions/{session}/expire'
};

/** The double's heart: state, what is due later, and events on their way. */
export class Engine {
	readonly store: Store;
	readonly faults = new Faults();
	readonly webhooks: Webhooks;
	readonly platform: string;
	/** The double's own address; known once it listens. */
	base = '';
	#laterMs: number;
	#timer: NodeJS.Timeout | undefined;
	#sweep: NodeJS.Timeout;
	#stopped = false;

	constructor(options: EngineOptions) {
		this.store = new Store(new Journal(options.stateDir));
		this.#laterMs = options.laterMs;
		this.webhooks = new Webhooks(this.store, this.faults, {
			url: options.webhookUrl,
			secret: options.webhookSecret
		});
		this.platform = this.#findPlatform();
		this.#sweep = setInterval(() => this.#forgetOldAnswers(), SWEEP_EVERY_MS);
		this.#sweep.unref();
	}

	/** Takes up what a kill or a stop interrupted. */
	resume(): void {
		this.webhooks.wake();
		this.runDueTasks();
	}

	/** A call of the double's own, or with `more` of an API client. */
	call(owner: string, causes: string[], more: Partial<Call> = {}): Call {
		return {
			tx: this.store.begin(),
			owner,
			platform: this.platform,
			base: this.base,
			apiVersion: Stripe.API_VERSION,
			requestId: null,
			idempotencyKey: null,
			causes,
			nowMs: Date.now(),
			laterMs: this.#laterMs,
			...more
		};
	}

	/** Makes a call's changes last, then sends its events and looks at what is due. */
	commit(call: Call): void {
		call.tx.commit();
		this.webhooks.wake();
		this.runDueTasks();
	}

	/** Does what is due, each in a transaction of its own; with `early` also what is due later. */
	runDueTasks(early: (task: Task) => boolean = () => false): number {
		if (this.#stopped) return 0;
		clearTimeout(this.#timer);
		const now = Date.now();
		const tasks = [...this.store.table('task').values()].sort((a, b) => a.order - b.order);
		let done = 0;
		for (const { id, owner, value } of tasks) {
			if (value.dueAtMs > now && !early(value)) continue;
			const call = this.call(owner, [TASK_CAUSES[value.what]]);
			doTask(call, value);
			call.tx.remove('task', id);
			call.tx.commit();
			done += 1;
		}
		if (done > 0) this.webhooks.wake();
		const next = Math.min(...[...this.store.table('task').values()].map((t) => t.value.dueAtMs));
		if (Number.isFinite(next)) {
			this.#timer = setTimeout(
				() => this.runDueTasks(),
				Math.max(10, Math.min(next - now, 2 ** 30))
			);
		}
		return done;
	}

	async stop(): Promise<void> {
		this.#stopped = true;
		clearTimeout(this.#timer);
		clearInterval(this.#sweep);
		await this.webhooks.stop();
		this.store.close();
	}

	#findPlatform(): string {
		const tx = this.store.begin();
		// The platform is the one account that belongs to itself.
		const known = tx.rows('account').find((row) => row.owner === row.id);
		if (known) return known.id;
		const id = newId('acct', 16);
		tx.put('account', id, id, platformAccount(id, Math.floor(Date.now() / 1000)));
		tx.commit();
		return id;
	}

	#forgetOldAnswers(): void {
		const tx = this.store.begin();
		for (const { id, value } of this.store.table('answer').values()) {
			if (Date.now() - value.createdMs > ANSWERS_KEPT_MS) tx.remove('answer', id);
		}
		tx.commit();
	}
}

function doTask(call: Call, task: Task): void {
	if (task.what === 'expire_session') {
		const session = call.tx.row('session', task.subject)?.value;
		if (session?.status === 'open') expireSession(call, session);
	} else if (task.what === 'open_dispute') {
		const charge = call.tx.row('charge', task.subject)?.value;
		if (charge) openDispute(call, charge);
	} else {
		const refund = call.tx.row('refund', task.subject)?.value;
		if (refund) (task.what === 'fail_refund' ? failRefund : settleRefund)(call, refund);
	}
}
