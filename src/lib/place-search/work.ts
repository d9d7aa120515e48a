import { createSite } from '../optics';
import { boundingBox } from '../optics/polygon';
import { climb, type Climbed, type ClimbSteps } from './climb';
import { countPlacement, type PlaceTotals } from './count';
import { flatnessOf, type Flatness } from './flatness';
import { Judge } from './judge';
import type { Ground, PlaceQuestion, Placement } from './question';
import { seasonSky } from './season-sky';

/** A piece of a search, small enough to be handed to one of several workers. */
export type PlaceJob =
	| { readonly kind: 'judge'; readonly placements: readonly Placement[]; readonly fine: boolean }
	| {
			readonly kind: 'climb';
			readonly from: Placement;
			readonly minutes: number;
			readonly steps: ClimbSteps;
	  }
	/** Null: the plan as it stands. */
	| { readonly kind: 'count'; readonly placement: Placement | null }
	| { readonly kind: 'flatness'; readonly placement: Placement }
	/** Minutes in which anything could be sold at all. */
	| { readonly kind: 'sun' };

/** What comes of a job, by its kind. */
export interface PlaceResults {
	readonly judge: readonly number[];
	readonly climb: Climbed;
	readonly count: PlaceTotals;
	readonly flatness: Flatness;
	readonly sun: number;
}

/** Where the visitors of a zone stand: the middle of the box about it. */
function middleOf(outline: readonly Ground[]): Ground {
	const { west, east, south, north } = boundingBox(outline);
	return [(west + east) / 2, (south + north) / 2];
}

/** Does the jobs of one question; what every placement needs is worked out once. */
export class PlaceWork {
	readonly judge: Judge;
	private readonly question: PlaceQuestion;
	private readonly middle: Ground;
	private readonly sunMinutes: number;

	/** @throws RangeError when the plan, the zone, the season or the hours are wrong */
	constructor(question: PlaceQuestion) {
		const site = createSite(question.plan);
		const sky = seasonSky(site, question.pattern.hours, question.season);
		this.question = question;
		this.sunMinutes = sky.minutesInAll;
		this.judge = new Judge(question, site, sky);
		this.middle = middleOf(question.plan.zones[question.zoneIndex]!.outline);
	}

	/** Does one job. */
	do<Job extends PlaceJob>(job: Job): PlaceResults[Job['kind']];
	do(job: PlaceJob): PlaceResults[keyof PlaceResults] {
		const { question, judge } = this;
		const fine = (placement: Placement) => judge.fineMinutes(placement);
		switch (job.kind) {
			case 'judge':
				return job.placements.map((one) => (job.fine ? fine(one) : judge.coarseMinutes(one)));
			case 'climb':
				return climb({
					...job,
					area: question.area,
					lengthM: question.curtain.lengthM,
					middle: this.middle,
					judge: fine
				});
			case 'count':
				return countPlacement(question, job.placement);
			case 'flatness':
				return flatnessOf(job.placement, fine);
			case 'sun':
				return this.sunMinutes;
		}
	}
}
