import { kindWords, type PartRef } from '../../plan-table/parts';
import { TableState } from '../../plan-table/table-state.svelte';
import { fitted, type View } from '../../plan-table/view';
import type { Plan } from '../../schemas/plan';
import { areaFault } from '../area';
import type { Ground } from '../question';

const AREA: PartRef = { kind: 'zones', index: 0 };
const NAME = 'Free area';

const faultWords = {
	corners: 'Give every corner as numbers.',
	crosses: 'The free area crosses or touches itself: pull its corners apart.',
	empty: 'The free area encloses nothing: pull its corners apart.'
};

/**
 * The free area on a table of its own: a plan with nothing but one zone, so that it is drawn, dragged,
 * snapped and undone as zones are. What it lies in is looked at only.
 */
export class AreaTable extends TableState {
	readonly #whole: Plan;

	readonly corners: readonly Ground[] = $derived(this.plan.zones[0]?.outline ?? []);
	readonly areaFault: string | null = $derived.by(() => {
		if (Object.keys(this.untidy).length > 0) return faultWords.corners;
		const fault = areaFault(this.corners);
		return fault === null ? null : faultWords[fault];
	});

	/** @param whole the plan in which the area lies */
	constructor(whole: Plan, area: readonly Ground[], date: string) {
		const outline = area.map(([x, y]): [number, number] => [x, y]);
		const zone = { name: NAME, outline, floor: 0, eyeHeights: [1.5] };
		super({ ...whole, curtains: [], walls: [], zones: [zone] }, { date, readonly: false });
		this.#whole = whole;
		super.select(AREA);
	}

	override fit(widthPx: number, heightPx: number): View {
		return fitted(
			{ ...this.#whole, zones: [...this.#whole.zones, ...this.plan.zones] },
			widthPx,
			heightPx
		);
	}

	/** Another area instead of the one that is drawn. */
	setArea(area: readonly Ground[]): void {
		const [zone] = this.settled.zones;
		const outline = area.map(([x, y]): [number, number] => [x, y]);
		this.untidy = {};
		if (zone) this.change({ ...this.settled, zones: [{ ...zone, outline }] });
	}

	/** What is drawn anew takes the place of what was there: there is one area. */
	override change(plan: Plan, key: string | null = null): void {
		const zones = plan.zones.slice(-1).map((zone) => ({ ...zone, name: NAME }));
		super.change({ ...plan, zones }, key);
	}

	override select(ref: PartRef | null): void {
		super.select(ref && AREA);
	}

	/** It is drawn anew, never taken away. */
	override remove(): void {
		this.setArea(this.corners);
	}
}

/** How the area is drawn anew. */
export const areaTools = [
	{ kind: null, label: 'Move' },
	{ kind: 'zones', label: 'Draw anew' }
] as const;

export const areaWords = { ...kindWords, zones: 'the free area' };
