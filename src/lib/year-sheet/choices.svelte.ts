import {
	isLocalDate,
	parseTimeOfDay,
	type OpeningHours,
	type Season,
	type SlotPattern
} from '../schedule';
import { parseHours } from '../schemas/site';
import type { ColourBy } from './sheet';

/** A programme as the sheet takes its hours and slots from it. */
export interface ProgrammeChoice {
	readonly id: string;
	readonly name: string;
	readonly zone: string;
	readonly seasonFrom: string;
	readonly seasonTo: string;
	/** Seven, Monday first; wall-clock times. */
	readonly openingHours: readonly (readonly { from: string; to: string }[])[];
	readonly daysOff: readonly string[];
	readonly slotMinutes: number;
	readonly gapMinutes: number;
	readonly gridMinutes: number;
	readonly capacity: number;
}

/** What would be sold, read from the fields. */
export interface Selling {
	readonly pattern: SlotPattern;
	readonly capacity: number;
	readonly season: Season | null;
}

const TYPED = 'typed';

const limits = {
	slotMinutes: ['the length', 5, 240],
	gapMinutes: ['the gap', 0, 240],
	gridMinutes: ['the grid', 1, 60],
	capacity: ['the places', 1, 5000]
} as const;
type NumberField = keyof typeof limits;
export type ChoiceField = NumberField | 'workdayHours' | 'weekendHours' | 'year';

const minutesOf = (spans: readonly { from: string; to: string }[]) =>
	spans.map(({ from, to }) => ({
		fromMinute: parseTimeOfDay(from),
		toMinute: parseTimeOfDay(to)
	}));

/** What is chosen and typed beside a year sheet. What is typed wrong is said, and the last right stays. */
export class SheetChoices {
	version = $state('');
	zone = $state('');
	year = $state('');
	programmeId = $state(TYPED);
	/** Only the programme's season, or its hours the year round. */
	onlySeason = $state(false);
	workdayHours = $state('09:00-18:00');
	weekendHours = $state('09:00-18:00');
	slotMinutes = $state('20');
	gapMinutes = $state('10');
	gridMinutes = $state('10');
	capacity = $state('12');
	colourBy: ColourBy = $state('share');

	readonly programme: ProgrammeChoice | null = $derived.by(
		() => this.programmes.find(({ id }) => id === this.programmeId) ?? null
	);
	readonly faults: Partial<Record<ChoiceField, string>> = $derived.by(() => this.#findFaults());
	readonly selling: Selling = $derived.by(() => this.#readSelling());
	readonly yearNumber: number = $derived.by(() => {
		if (!this.faults.year) this.#lastYear = Number(this.year);
		return this.#lastYear;
	});

	#lastSelling: Selling | null = null;
	#lastYear: number;

	constructor(
		readonly programmes: readonly ProgrammeChoice[],
		from: { version: string; zone: string; year: number; programmeId: string | null }
	) {
		this.version = from.version;
		this.zone = from.zone;
		this.year = String(from.year);
		this.#lastYear = from.year;
		if (from.programmeId) this.takeProgramme(from.programmeId);
	}

	/** Whether the programme's season touches the year at all. */
	get seasonTouches(): boolean {
		const { programme, yearNumber } = this;
		return (
			programme !== null &&
			programme.seasonFrom <= `${yearNumber}-12-31` &&
			programme.seasonTo >= `${yearNumber}-01-01`
		);
	}

	/** Takes hours, slots and season of a programme, or goes back to typed hours. */
	takeProgramme(id: string): void {
		const found = this.programmes.find((one) => one.id === id);
		this.programmeId = found?.id ?? TYPED;
		if (!found) return;
		this.zone = found.zone;
		this.onlySeason = false;
		for (const field of Object.keys(limits) as NumberField[]) this[field] = String(found[field]);
	}

	#findFaults(): Partial<Record<ChoiceField, string>> {
		const faults: Partial<Record<ChoiceField, string>> = {};
		for (const [field, [what, least, most]] of Object.entries(limits)) {
			const typed = this[field as NumberField].trim();
			const value = /^\d{1,5}$/.test(typed) ? Number(typed) : NaN;
			if (!(value >= least && value <= most)) {
				faults[field as NumberField] = `Give ${what} from ${least} to ${most}.`;
			}
		}
		if (!this.programme) {
			for (const field of ['workdayHours', 'weekendHours'] as const) {
				if (!parseHours(this[field])) faults[field] = 'Give hours such as 09:00-18:00.';
			}
		}
		if (!isLocalDate(`${this.year.trim()}-01-01`)) faults.year = 'Give a year from 1900 to 2149.';
		return faults;
	}

	#hours(): OpeningHours {
		if (this.programme) {
			return {
				weekdays: this.programme.openingHours.map(minutesOf),
				daysOff: [...this.programme.daysOff]
			};
		}
		const workday = minutesOf(parseHours(this.workdayHours) ?? []);
		const weekend = minutesOf(parseHours(this.weekendHours) ?? []);
		return {
			weekdays: [workday, workday, workday, workday, workday, weekend, weekend],
			daysOff: []
		};
	}

	#readSelling(): Selling {
		const { year: _, ...faults } = this.faults;
		if (this.#lastSelling && Object.keys(faults).length > 0) return this.#lastSelling;
		const { programme } = this;
		this.#lastSelling = {
			pattern: {
				lengthMinutes: Number(this.slotMinutes),
				gapMinutes: Number(this.gapMinutes),
				gridMinutes: Number(this.gridMinutes),
				hours: this.#hours()
			},
			capacity: Number(this.capacity),
			season:
				programme && this.onlySeason ? { from: programme.seasonFrom, to: programme.seasonTo } : null
		};
		return this.#lastSelling;
	}
}
