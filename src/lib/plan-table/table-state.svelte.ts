import {
	createSite,
	stateAt,
	sunPosition,
	type Eye,
	type SeenArc,
	type Site,
	type SiteState,
	type SunPosition
} from '../optics';
import type { LocalDate } from '../schedule';
import { localClock } from '../schedule';
import { jsonPath, planSchema, type Plan, type PlanFault } from '../schemas/plan';
import { record, redo, startHistory, undo, type History } from './history';
import { tableDay } from './moment';
import {
	movedPart,
	nameOf,
	pathOf,
	samePart,
	sheetAt,
	withNewPart,
	withoutPart,
	zoneAt,
	type PartKind,
	type PartRef
} from './parts';
import { arcsFor, litParts, middleEye, spotsOf, type LitPart, type Spot } from './seen';
import type { Snap } from './snap';
import type { Place } from './geometry';
import { fitted, type View } from './view';

/** A plan as the table works with it: with the site when it is right, else with its faults. */
function worked(plan: Plan): { site: Site | null; faults: PlanFault[] } {
	try {
		// Checks the plan by the schema itself; asked first, as a right plan is the rule.
		return { site: createSite(plan), faults: [] };
	} catch (thrown) {
		if (!(thrown instanceof RangeError)) throw thrown;
		const read = planSchema.safeParse(plan);
		const issues = read.success ? [] : read.error.issues;
		const faults = issues.map(({ path, message }) => ({ path: jsonPath(path), message }));
		return {
			site: null,
			faults: faults.length > 0 ? faults : [{ path: 'plan', message: thrown.message }]
		};
	}
}

/** Everything that the plan table holds: the plan with its history, what is chosen, and the moment. */
export class TableState {
	#history: History<Plan> = $state.raw() as History<Plan>;
	/** The plan under a drag: it joins the history when the drag ends. */
	#draft: Plan | null = $state.raw(null);
	#saved: Plan = $state.raw() as Plan;
	readonly readonly: boolean;

	/** Null until the drawing knows its size. */
	view: View | null = $state.raw(null);
	selected: PartRef | null = $state.raw(null);
	/** What the pointer draws; null: it selects and moves. */
	tool: PartKind | null = $state(null);
	stepM = $state(1);
	snapOn = $state(true);
	rightAngles = $state(true);

	date: LocalDate = $state('');
	/** Minutes since the local day began: elapsed, so that days of 23 and 25 hours need no care. */
	minute = $state(720);
	zoneIndex = $state(0);
	/** The spot whose bow the curtains show; null: the zone's middle. */
	spot: number | null = $state(null);
	/** Typed texts that are no number, by field: kept until they are mended. */
	untidy: Record<string, string> = $state({});
	/** Faults that the server found. */
	serverFaults: PlanFault[] = $state.raw([]);

	readonly plan = $derived(this.#draft ?? this.#history.present);
	readonly #worked = $derived(worked(this.plan));
	readonly site = $derived(this.#worked.site);
	readonly faults = $derived([...this.#worked.faults, ...this.serverFaults]);
	readonly dirty = $derived(
		this.#history.present !== this.#saved || Object.keys(this.untidy).length > 0
	);
	readonly canUndo = $derived(this.#history.past.length > 0);
	readonly canRedo = $derived(this.#history.future.length > 0);
	readonly snap: Snap = $derived({
		stepM: this.snapOn ? this.stepM : null,
		rightAngles: this.rightAngles
	});

	readonly clock = $derived(localClock(this.plan.timeZone));
	readonly day = $derived(tableDay(this.plan.timeZone, this.date));
	readonly instantMs = $derived(this.day.startMs + this.minute * 60_000);
	readonly sun: SunPosition = $derived(
		sunPosition({
			instantMs: this.instantMs,
			latitudeDeg: this.plan.latitude,
			longitudeDeg: this.plan.longitude
		})
	);
	readonly state: SiteState | null = $derived(
		this.site ? stateAt(this.site, this.instantMs) : null
	);
	readonly spots: Spot[][] = $derived(
		(this.state?.zones ?? []).map((zone, i) =>
			spotsOf(zone, this.plan.zones[i]?.eyeHeights.length ?? 1)
		)
	);
	/** The eye whose bow the curtains show. */
	readonly eye: Eye | null = $derived.by(() => {
		const zone = this.plan.zones[this.zoneIndex];
		if (!this.site || !zone) return null;
		const chosen =
			this.spot === null
				? undefined
				: this.site.zones[this.zoneIndex]?.eyes[this.spot * zone.eyeHeights.length];
		return chosen ?? middleEye(this.site, zone, this.zoneIndex);
	});
	/** The bow that this eye sees, asked of the engine once a frame. */
	readonly arcs: SeenArc[] = $derived(
		this.site && this.eye ? arcsFor(this.site, this.eye, this.sun) : []
	);
	readonly lit: LitPart[] = $derived(litParts(this.arcs));

	constructor(plan: Plan, { date, readonly }: { date: LocalDate; readonly: boolean }) {
		this.#history = startHistory(plan);
		this.#saved = plan;
		this.date = date;
		this.readonly = readonly;
	}

	/** The view that shows everything. */
	fit(widthPx: number, heightPx: number): View {
		return fitted(this.plan, widthPx, heightPx);
	}

	/** What is wrong with a field, or with anything in it: `curtains[0].to` takes `curtains[0].to[1]`. */
	faultOf(path: string, deep = false): string | undefined {
		if (this.untidy[path] !== undefined) return 'must be a number';
		return this.faults.find(
			(fault) =>
				fault.path === path ||
				(deep && /^[.[]/.test(fault.path.slice(path.length)) && fault.path.startsWith(path))
		)?.message;
	}

	/** Whether a part or one of its fields has a fault. */
	isWrong(ref: PartRef): boolean {
		const path = pathOf(ref);
		return (
			this.faultOf(path, true) !== undefined ||
			Object.keys(this.untidy).some((field) => field.startsWith(path))
		);
	}

	/** Does an act that can be undone. @param key acts under one key are undone as one */
	change(plan: Plan, key: string | null = null): void {
		this.#draft = null;
		this.#history = record(this.#history, plan, key);
		this.serverFaults = [];
	}

	/** Shows the plan as it would be after the drag that is going on. */
	draft(plan: Plan): void {
		this.#draft = plan;
	}

	/** The plan from which a drag started. */
	get settled(): Plan {
		return this.#history.present;
	}

	endDrag(): void {
		if (this.#draft) this.change(this.#draft);
	}

	cancelDrag(): boolean {
		const dragged = this.#draft !== null;
		this.#draft = null;
		return dragged;
	}

	undo(): void {
		this.#draft = null;
		this.#history = undo(this.#history);
		this.#afterTravel();
	}

	redo(): void {
		this.#draft = null;
		this.#history = redo(this.#history);
		this.#afterTravel();
	}

	#afterTravel(): void {
		this.untidy = {};
		this.serverFaults = [];
		if (this.selected && !this.exists(this.selected)) this.selected = null;
		this.zoneIndex = Math.max(0, Math.min(this.zoneIndex, this.plan.zones.length - 1));
	}

	exists(ref: PartRef): boolean {
		return (sheetAt(this.plan, ref) ?? zoneAt(this.plan, ref)) !== null;
	}

	select(ref: PartRef | null): void {
		if (samePart(this.selected, ref)) return;
		this.selected = ref;
		if (ref?.kind === 'zones') {
			this.zoneIndex = ref.index;
			this.spot = null;
		}
	}

	/** Adds a part between two places and selects it. */
	add(kind: PartKind, from: Place, to: Place): PartRef {
		const { plan, ref } = withNewPart(this.settled, kind, from, to);
		this.change(plan);
		this.tool = null;
		this.select(ref);
		return ref;
	}

	remove(ref: PartRef): void {
		this.untidy = {};
		this.change(withoutPart(this.settled, ref));
		this.selected = null;
		this.spot = null;
		this.zoneIndex = Math.max(0, Math.min(this.zoneIndex, this.plan.zones.length - 1));
	}

	/** Copies a part two steps to the south-east. */
	copy(ref: PartRef): void {
		const list = this.settled[ref.kind] ?? [];
		const part = list[ref.index];
		if (!part) return;
		const to = { kind: ref.kind, index: list.length };
		const name = part.name ? { name: `${nameOf(this.settled, ref)} copy` } : {};
		const more = { ...this.settled, [ref.kind]: [...list, { ...part, ...name }] };
		this.change(movedPart(more, to, [2, -2]));
		this.select(to);
	}

	/** What was last saved, or seen to be saved: what a merge begins from. */
	get saved(): Plan {
		return this.#saved;
	}

	markSaved(plan: Plan): void {
		this.#saved = plan;
	}
}
