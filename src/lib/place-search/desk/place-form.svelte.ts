import { DROP_DIAMETER_RANGE_UM } from '../../optics/bow-radius';
import { addDays, isLocalDate, localDayRange, MOST_DAYS } from '../../schedule';
import type { Plan } from '../../schemas/plan';
import { typedNumber } from '../../schemas/plan-form';
import { SheetChoices, type ProgrammeChoice } from '../../year-sheet/choices.svelte';
import { widestM } from '../area';
import type { Ground, PlaceQuestion } from '../question';

/** A curtain that is not in the plan yet. */
export const NEW_CURTAIN = 'new';

/** Heights lie within so many metres of the datum, as in the plan. */
const FURTHEST_M = 10_000;

export type PlaceField =
	'lengthM' | 'bottomM' | 'topM' | 'dropDiameterUm' | 'seasonFrom' | 'seasonTo' | 'workdayHours';

const text = (value: number) => String(Math.round(value * 1000) / 1000);

/** What is typed beside a search. What is wrong is said at its field, and nothing typed is lost. */
export class PlaceForm {
	readonly choices: SheetChoices;
	/** The curtain that is sought a place for: its place in the plan, or a new one. */
	curtain = $state(NEW_CURTAIN);
	lengthM = $state('10');
	bottomM = $state('0.3');
	topM = $state('6');
	dropDiameterUm = $state('400');
	seasonFrom = $state('');
	seasonTo = $state('');

	readonly zoneNames: readonly string[];
	readonly zoneIndex: number = $derived.by(() =>
		Math.max(0, this.zoneNames.indexOf(this.choices.zone))
	);
	readonly replaces: number | null = $derived.by(() =>
		this.curtain === NEW_CURTAIN ? null : Number(this.curtain)
	);
	readonly faults: Partial<Record<PlaceField, string>> = $derived.by(() => this.#findFaults());
	/** How many faults keep a search from being started, those of hours and slots among them. */
	readonly faultCount: number = $derived.by(() => {
		const { year: _, ...others } = this.choices.faults;
		return Object.keys(this.faults).length + Object.keys(others).length;
	});

	readonly #plan: Plan;
	readonly #area: () => readonly Ground[];

	/**
	 * @param plan with a zone at least
	 * @param area corners as they are drawn
	 * @param today local date at the site
	 */
	constructor({
		plan,
		programmes,
		area,
		today
	}: {
		plan: Plan;
		programmes: readonly ProgrammeChoice[];
		area: () => readonly Ground[];
		today: string;
	}) {
		this.#plan = plan;
		this.#area = area;
		this.zoneNames = plan.zones.map(({ name }, i) => name ?? `Zone ${i + 1}`);
		// In the last quarter of a year it is the next one that is planned.
		const year = Number(addDays(today, 92).slice(0, 4));
		const own = programmes.filter(({ zone }) => this.zoneNames.includes(zone));
		this.choices = new SheetChoices(own, {
			version: '',
			zone: own[0]?.zone ?? this.zoneNames[0] ?? '',
			year,
			programmeId: own[0]?.id ?? null
		});
		const { programme } = this.choices;
		const summer =
			plan.latitude >= 0
				? { from: `${year}-04-01`, to: `${year}-10-31` }
				: { from: `${year}-10-01`, to: `${year + 1}-04-30` };
		this.seasonFrom = programme?.seasonFrom ?? summer.from;
		this.seasonTo = programme?.seasonTo ?? summer.to;
		this.chooseCurtain(plan.curtains.length > 0 ? '0' : NEW_CURTAIN);
	}

	/** Takes the season of the programme whose hours were chosen. */
	takeSeason(): void {
		const { programme } = this.choices;
		if (!programme) return;
		this.seasonFrom = programme.seasonFrom;
		this.seasonTo = programme.seasonTo;
	}

	/** Chooses the curtain, and takes its measures; a new one takes those of the last curtain there is. */
	chooseCurtain(value: string): void {
		this.curtain = value;
		const { curtains } = this.#plan;
		const like = value === NEW_CURTAIN ? curtains.at(-1) : curtains[Number(value)];
		if (!like) return;
		this.lengthM = text(Math.hypot(like.to[0] - like.from[0], like.to[1] - like.from[1]));
		this.bottomM = text(like.bottom);
		this.topM = text(like.top);
		this.dropDiameterUm = text(like.dropDiameter);
	}

	#findFaults(): Partial<Record<PlaceField, string>> {
		const faults: Partial<Record<PlaceField, string>> = {};
		const number = (field: 'lengthM' | 'bottomM' | 'topM' | 'dropDiameterUm') => {
			const value = typedNumber(this[field]);
			if (Number.isNaN(value)) faults[field] = 'Give a number.';
			return value;
		};
		const lengthM = number('lengthM');
		const bottomM = number('bottomM');
		const topM = number('topM');
		const drops = number('dropDiameterUm');
		const longest = widestM(this.#area());
		if (lengthM <= 0) faults.lengthM = 'The length must be above 0.';
		else if (lengthM > longest) {
			const most = Math.floor(longest * 10) / 10;
			faults.lengthM = `The free area is ${most} m across at most: the curtain is too long for it.`;
		}
		for (const [field, value] of [
			['bottomM', bottomM],
			['topM', topM]
		] as const) {
			if (Math.abs(value) > FURTHEST_M) faults[field] = `Give metres up to ${FURTHEST_M}.`;
		}
		if (topM <= bottomM) faults.topM = 'The top must be above the bottom.';
		const { least, greatest } = DROP_DIAMETER_RANGE_UM;
		if (drops < least || drops > greatest) {
			faults.dropDiameterUm = `Give drops from ${least} to ${greatest} µm.`;
		}
		for (const field of ['seasonFrom', 'seasonTo'] as const) {
			if (!isLocalDate(this[field])) faults[field] = 'Give a date from 1900 to 2149.';
		}
		if (!faults.seasonFrom && !faults.seasonTo) {
			if (this.seasonTo < this.seasonFrom) faults.seasonTo = 'The end is before the start.';
			else if (this.#days() > MOST_DAYS)
				faults.seasonTo = `A season has at most ${MOST_DAYS} days.`;
		}
		const { selling, faults: others } = this.choices;
		const closed = selling.pattern.hours.weekdays.every((spans) => spans.length === 0);
		if (closed && !others.workdayHours && !others.weekendHours) {
			faults.workdayHours = 'Open on one day of the week at least.';
		}
		return faults;
	}

	#days(): number {
		const most = addDays(this.seasonFrom, MOST_DAYS);
		if (this.seasonTo >= most) return MOST_DAYS + 1;
		return localDayRange({ timeZone: 'UTC', from: this.seasonFrom, to: this.seasonTo }).days;
	}

	/** What is asked; null while anything is wrong. */
	question(): PlaceQuestion | null {
		if (this.faultCount > 0) return null;
		const { pattern, capacity } = this.choices.selling;
		return {
			plan: this.#plan,
			zoneIndex: this.zoneIndex,
			replaces: this.replaces,
			curtain: {
				lengthM: typedNumber(this.lengthM),
				bottomM: typedNumber(this.bottomM),
				topM: typedNumber(this.topM),
				dropDiameterUm: typedNumber(this.dropDiameterUm)
			},
			area: this.#area().map(([x, y]) => [x, y] as const),
			season: { from: this.seasonFrom, to: this.seasonTo },
			pattern,
			capacity
		};
	}
}
