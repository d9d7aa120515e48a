import type { Plan } from '../schemas/plan';
import { planWithWhatIf, whatIfFields, type WhatIfFaults, type WhatIfFields } from './what-if';

/** What the chosen plan is compared with: nothing, an edited copy of it, or another version. */
export class Comparison {
	/** Empty, `what-if`, or the number of a version. */
	with = $state('');
	fields: WhatIfFields = $state({
		curtains: [],
		minimumArcDeg: '',
		minimumSharePercent: '',
		minimumSunAltitudeDeg: ''
	});

	readonly faults: WhatIfFaults = $derived.by(() =>
		'faults' in this.#edited ? this.#edited.faults : {}
	);
	/** Null when nothing is compared. While what is typed is wrong the last right plan stays. */
	readonly plan: Plan | null = $derived.by(() => {
		if (this.with !== 'what-if') {
			const found = this.#versions().find(({ version }) => String(version) === this.with);
			return found && found.body !== this.#base() ? found.body : null;
		}
		if ('plan' in this.#edited) this.#lastRight = this.#edited.plan;
		return this.#lastRight;
	});

	readonly #edited = $derived.by(() => planWithWhatIf(this.#base(), this.fields));
	readonly #base: () => Plan;
	readonly #versions: () => readonly { version: number; body: Plan }[];
	#lastRight: Plan | null = null;
	/** The plan that the fields began as. */
	#editedBase: Plan | null = null;

	constructor(base: () => Plan, versions: () => readonly { version: number; body: Plan }[]) {
		this.#base = base;
		this.#versions = versions;
	}

	get name(): string {
		return this.with === 'what-if' ? 'what-if' : `version ${this.with}`;
	}

	/** Chooses what to compare with; a what-if begins as the plan stands, or goes on as it was left. */
	choose(value: string): void {
		if (value === 'what-if' && this.#editedBase !== this.#base()) this.reset();
		this.with = value;
	}

	/** The what-if is the plan again, as also when another version is chosen as its base. */
	reset(): void {
		this.#lastRight = null;
		this.#editedBase = this.#base();
		this.fields = whatIfFields(this.#base());
	}
}
