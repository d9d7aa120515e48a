import { draggedPlan, type Drag } from './drag';
import type { Place } from './geometry';
import type { PartRef } from './parts';
import type { TableState } from './table-state.svelte';
import { pannedBy, toGround, zoomedAt } from './view';

/** A press becomes a drag after so many pixels: a click must not move anything. */
const SLACK_PX = 4;

/** What a pointer that goes down finds under it. */
export interface Under {
	part: PartRef | null;
	drag: Drag | null;
	/** The spot of a zone. */
	spot?: number | undefined;
}

/** Pointers on the drawing, by mouse, pen or finger: one drags or pans, two pinch. Places are pixels. */
export class Gestures {
	readonly #table: TableState;
	readonly #pointers: Record<number, Place> = {};
	#grip: { drag: Drag | 'pan'; from: Place; moved: boolean; under: Under } | null = null;
	/** The part that is being dragged or drawn. */
	dragging: PartRef | null = $state.raw(null);

	constructor(table: TableState) {
		this.#table = table;
	}

	press(pointer: number, here: Place, under: Under): void {
		const table = this.#table;
		if (!table.view) return;
		this.#pointers[pointer] = here;
		if (Object.keys(this.#pointers).length > 1) {
			// A second finger: what the first began was meant as a pinch.
			this.cancel();
			return;
		}
		const start = toGround(table.view, here);
		let drag: Drag | 'pan' = 'pan';
		if (table.tool && !table.readonly) {
			drag = { act: 'draw', kind: table.tool, start };
		} else {
			if (under.part) table.select(under.part);
			if (under.drag && !table.readonly) drag = under.drag;
		}
		this.#grip = { drag, from: here, moved: false, under };
	}

	move(pointer: number, here: Place): void {
		const table = this.#table;
		const before = this.#pointers[pointer];
		if (!before || !table.view) return;
		const others = Object.entries(this.#pointers).filter(([id]) => Number(id) !== pointer);
		this.#pointers[pointer] = here;
		const other = others[0]?.[1];
		if (other) {
			const far = (place: Place) => Math.hypot(place[0] - other[0], place[1] - other[1]);
			const centre: Place = [(here[0] + other[0]) / 2, (here[1] + other[1]) / 2];
			const [dx, dy] = [here[0] - before[0], here[1] - before[1]];
			const panned = pannedBy(table.view, dx / 2, dy / 2);
			table.view = zoomedAt(panned, far(here) / Math.max(1, far(before)), centre);
			return;
		}
		const grip = this.#grip;
		if (!grip) return;
		const apart = Math.hypot(here[0] - grip.from[0], here[1] - grip.from[1]);
		if (!grip.moved && apart < SLACK_PX) return;
		grip.moved = true;
		if (grip.drag === 'pan') {
			table.view = pannedBy(table.view, here[0] - before[0], here[1] - before[1]);
			return;
		}
		const { drag } = grip;
		const base = table.settled;
		table.draft(draggedPlan(base, drag, toGround(table.view, here), table.snap));
		this.dragging =
			drag.act === 'draw' ? { kind: drag.kind, index: (base[drag.kind] ?? []).length } : drag.ref;
	}

	release(pointer: number, cancelled: boolean): void {
		const table = this.#table;
		delete this.#pointers[pointer];
		const grip = this.#grip;
		if (!grip) return;
		this.#grip = null;
		const { drag, moved, under } = grip;
		if (cancelled) table.cancelDrag();
		else if (drag !== 'pan' && moved) {
			table.endDrag();
			if (drag.act === 'draw') {
				table.tool = null;
				table.select(this.dragging);
			}
		} else if (!moved && !under.part) {
			table.select(null);
			table.spot = null;
		} else if (!moved && under.part?.kind === 'zones') {
			table.zoneIndex = under.part.index;
			table.spot = under.spot ?? null;
		}
		this.dragging = null;
	}

	/** Lets go of what is held, as if it had never been touched. @returns whether anything was held */
	cancel(): boolean {
		const held = this.#grip !== null;
		this.#table.cancelDrag();
		this.#grip = null;
		this.dragging = null;
		return held;
	}
}
