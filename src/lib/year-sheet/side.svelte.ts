import { localClock, yearTotals, type LocalClock, type YearTotals } from '../schedule';
import type { Plan } from '../schemas/plan';
import type { Selling } from './choices.svelte';
import { intervalsPath, sheetGround, windowPaths, type ColourBy } from './sheet';
import type { ColouredPath, SheetGround } from './sheet';
import { YearRun } from './year-run.svelte';

/** What one sheet of the page is of. */
export interface SideInput {
	/** Such as `version 3` or `what-if`. */
	readonly name: string;
	readonly plan: Plan;
	readonly zoneIndex: number;
	readonly year: number;
	readonly selling: Selling;
	readonly colourBy: ColourBy;
	/** Share that is straw: the same in two sheets that are compared. */
	readonly leastShare: number;
}

/** One sheet of the page: its run, its drawing, its totals. */
export class SheetSide {
	readonly run = new YearRun();
	readonly clock: LocalClock = $derived.by(() => localClock(this.#input().plan.timeZone));
	readonly ground: SheetGround = $derived.by(() => {
		const { plan, year, selling } = this.#input();
		return sheetGround({
			year,
			place: {
				latitudeDeg: plan.latitude,
				longitudeDeg: plan.longitude,
				clock: this.clock
			},
			hours: selling.pattern.hours,
			season: selling.season
		});
	});
	readonly paths: readonly ColouredPath[] = $derived.by(() => {
		const { selling, colourBy, leastShare } = this.#input();
		return windowPaths({
			ground: this.ground,
			clock: this.clock,
			windows: this.run.windows,
			shades: this.run.shades,
			hours: selling.pattern.hours,
			season: selling.season,
			colourBy,
			minimumShare: leastShare
		});
	});
	readonly daylightPath: string = $derived.by(() =>
		intervalsPath(this.ground, this.clock, this.run.daylight)
	);
	readonly totals: YearTotals = $derived.by(() => {
		const { year, selling } = this.#input();
		return yearTotals({ year, windows: this.run.windows, clock: this.clock, ...selling });
	});

	readonly #input: () => SideInput;

	/** @param input what it is of; read anew whenever it changes */
	constructor(input: () => SideInput) {
		this.#input = input;
	}

	get input(): SideInput {
		return this.#input();
	}
}
