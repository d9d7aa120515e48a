import type Stripe from 'stripe';
import type { Journal, JournalRow } from './journal.ts';

/** What a checkout session keeps for the payment that comes of it. */
export interface SessionTerms {
	session: string;
	lineItems: Stripe.LineItem[];
	payment: Stripe.Checkout.SessionCreateParams.PaymentIntentData;
}

/** Something due later: a refund that fails, a dispute, a session's end. */
export interface Task {
	what: 'fail_refund' | 'settle_refund' | 'open_dispute' | 'expire_session';
	subject: string;
	dueAtMs: number;
}

/** An event on its way to the webhook address. */
export interface Delivery {
	event: string;
	/** The acts that led to it, by which faults are matched. */
	causes: string[];
	attempts: number;
	dueAtMs: number;
}

/** The answer that an idempotency key stands for. */
export interface KeptAnswer {
	path: string;
	fingerprint: string;
	status: number;
	body: string;
	requestId: string;
	createdMs: number;
}

/** A link to the page where an account's owner completes it. */
export interface Onboarding {
	account: string;
	returnUrl: string;
	refreshUrl: string;
	expiresAt: number;
	used: boolean;
}

/** Everything that is kept, by kind. */
export interface Kinds {
	account: Stripe.Account;
	onboarding: Onboarding;
	session: Stripe.Checkout.Session;
	terms: SessionTerms;
	intent: Stripe.PaymentIntent;
	/** The card number behind a charge. */
	card: { number: string };
	charge: Stripe.Charge;
	refund: Stripe.Refund;
	fee: Stripe.ApplicationFee;
	feeRefund: Stripe.FeeRefund;
	dispute: Stripe.Dispute;
	balance: Stripe.BalanceTransaction;
	event: Stripe.Event;
	delivery: Delivery;
	task: Task;
	answer: KeptAnswer;
}

export type Kind = keyof Kinds;

export interface Row<K extends Kind> {
	id: string;
	/** The account that it belongs to. */
	owner: string;
	/** Counts up: newer rows have greater numbers. */
	order: number;
	value: Kinds[K];
}

type Table<K extends Kind> = Map<string, Row<K>>;

/** All rows in memory, every change in the journal before anybody hears of it. */
export class Store {
	#tables = new Map<Kind, Map<string, Row<Kind>>>();
	#order = 0;
	#journal: Journal;

	constructor(journal: Journal) {
		this.#journal = journal;
		for (const row of journal.read()) this.#apply(row);
		journal.compact(this.#rows());
	}

	/** Opens a transaction: what it puts is seen by it alone until `commit`. */
	begin(): Transaction {
		return new Transaction(this);
	}

	table<K extends Kind>(kind: K): Table<K> {
		let table = this.#tables.get(kind);
		if (!table) {
			table = new Map();
			this.#tables.set(kind, table);
		}
		return table as unknown as Table<K>;
	}

	nextOrder(): number {
		return ++this.#order;
	}

	/** Writes rows to the disk, then shows them. */
	commit(rows: JournalRow[]): void {
		if (rows.length === 0) return;
		this.#journal.append(rows);
		for (const row of rows) this.#apply(row);
	}

	close(): void {
		this.#journal.close();
	}

	#apply([kind, owner, id, order, value]: JournalRow): void {
		this.#order = Math.max(this.#order, order);
		const table = this.table(kind);
		if (value === null) table.delete(id);
		else table.set(id, { id, owner, order, value });
	}

	*#rows(): Iterable<JournalRow> {
		for (const [kind, table] of this.#tables) {
			for (const { owner, id, order, value } of table.values()) {
				yield [kind, owner, id, order, value];
			}
		}
	}
}

/** A set of changes that happen together or not at all. Values are never changed in place. */
export class Transaction {
	#store: Store;
	#staged = new Map<Kind, Map<string, Row<Kind> | null>>();

	constructor(store: Store) {
		this.#store = store;
	}

	/** One row by its id, whoever owns it. */
	row<K extends Kind>(kind: K, id: string): Row<K> | undefined {
		const staged = this.#staged.get(kind)?.get(id);
		if (staged === null) return undefined;
		return (staged as Row<K> | undefined) ?? this.#store.table(kind).get(id);
	}

	/** One value by its id, if `owner` owns it. */
	find<K extends Kind>(kind: K, owner: string, id: string): Kinds[K] | undefined {
		const row = this.row(kind, id);
		return row?.owner === owner ? row.value : undefined;
	}

	/** All rows of an owner, or of all, newest first. */
	rows<K extends Kind>(kind: K, owner?: string): Row<K>[] {
		const merged = new Map(this.#store.table(kind));
		for (const [id, row] of this.#staged.get(kind) ?? []) {
			if (row) merged.set(id, row as Row<K>);
			else merged.delete(id);
		}
		return [...merged.values()]
			.filter((row) => owner === undefined || row.owner === owner)
			.sort((a, b) => b.order - a.order);
	}

	/** Puts a new value, or a changed one in its place. */
	put<K extends Kind>(kind: K, owner: string, id: string, value: Kinds[K]): Kinds[K] {
		const order = this.row(kind, id)?.order ?? this.#store.nextOrder();
		this.#table(kind).set(id, { id, owner, order, value });
		return value;
	}

	remove(kind: Kind, id: string): void {
		this.#table(kind).set(id, null);
	}

	commit(): void {
		const rows: JournalRow[] = [];
		for (const [kind, table] of this.#staged) {
			for (const [id, row] of table) {
				rows.push(row ? [kind, row.owner, id, row.order, row.value] : [kind, '', id, 0, null]);
			}
		}
		this.#staged.clear();
		this.#store.commit(rows);
	}

	#table(kind: Kind): Map<string, Row<Kind> | null> {
		let table = this.#staged.get(kind);
		if (!table) {
			table = new Map();
			this.#staged.set(kind, table);
		}
		return table;
	}
}
