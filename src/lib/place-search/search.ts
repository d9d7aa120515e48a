import { polygonArea } from '../optics/polygon';
import { standsIn } from './area';
import { apart, clearNiches, elsewhereOf, nicheOf, valleyBetween, wayBetween } from './clear';
import type { ClimbSteps } from './climb';
import type { PlaceTotals } from './count';
import { tidyPlacement, type PlaceQuestion, type Placement } from './question';
import {
	byWorth,
	judgedAs,
	usualEffort,
	worth,
	type SearchEffort,
	type SearchProgress,
	type SearchResult,
	type SearchStage,
	type Suggestion
} from './suggestion';
import type { PlaceJob, PlaceResults } from './work';

/** One that does jobs: a worker, or the same thread. It is given one job at a time. */
export type PlaceWorker = <Job extends PlaceJob>(job: Job) => Promise<PlaceResults[Job['kind']]>;

/** Placements in the field of a usual search. */
export const FIELD_SIZE = 2400;

/** Placements handed over at a time: some tens of milliseconds of work. */
const AT_A_TIME = 12;

/** The last steps of a climb, metres. */
const LAST_STEP_M = 0.1;

/** Half of what lies between two placements of a field, in place and in bearing. */
function firstSteps(question: PlaceQuestion, fieldSize: number): ClimbSteps {
	const perSide = Math.cbrt(Math.max(1, fieldSize));
	const sideM = Math.sqrt(polygonArea(question.area));
	return {
		firstM: Math.min(4, Math.max(2 * LAST_STEP_M, sideM / perSide / 2)),
		firstDeg: 90 / perSide,
		lastM: LAST_STEP_M
	};
}

/** As it is told and hung, where that still stands in the area. */
function tidied(question: PlaceQuestion, placement: Placement): Placement {
	const tidy = tidyPlacement(placement);
	return standsIn(question.area, tidy, question.curtain.lengthM) ? tidy : placement;
}

/** A search that was asked to stop. It never gets out. */
class Stopped extends Error {}

interface SearchInput {
	question: PlaceQuestion;
	field: readonly Placement[];
	workers: readonly PlaceWorker[];
	effort?: SearchEffort;
	signal?: AbortSignal;
	onprogress?: (progress: SearchProgress) => void;
}

/** One search going on. */
class Search {
	best: readonly Suggestion[] = [];
	present: PlaceTotals | null = null;
	sunMinutes: number | null = null;
	judged = 0;

	readonly #question: PlaceQuestion;
	readonly #workers: readonly PlaceWorker[];
	readonly #effort: SearchEffort;
	readonly #onprogress: SearchInput['onprogress'];
	readonly #stopped: Promise<never>;
	readonly #lengthM: number;
	/** The whole field, best first. */
	#rough: readonly Suggestion[] = [];

	constructor({ question, workers, effort = usualEffort, signal, onprogress }: SearchInput) {
		this.#question = question;
		this.#workers = workers;
		this.#effort = effort;
		this.#onprogress = onprogress;
		this.#lengthM = question.curtain.lengthM;
		this.#stopped = new Promise((_, reject) => {
			const stop = () => reject(new Stopped());
			if (signal?.aborted) stop();
			else signal?.addEventListener('abort', stop, { once: true });
		});
		this.#stopped.catch(() => undefined);
	}

	async run(field: readonly Placement[]): Promise<void> {
		const { climbs, counted } = this.#effort;
		const closer = await this.#judgeField(field);
		const tops = closer.filter(({ minutes }) => minutes > 0).sort(byWorth);
		const summits =
			climbs > 0
				? await this.#hills(await this.#climb(this.#clear(tops, climbs), field.length))
				: tops.slice(0, counted);
		await this.#count(climbs > 0 ? this.#withOthers(summits) : summits);
		await this.#moveAbout();
		await this.#each('flatness', [{ kind: 'sun' as const }], (minutes) => {
			this.sunMinutes = minutes;
		});
	}

	/** Hands jobs to whoever is free; what comes back is taken in before that one is given the next. */
	async #each<Job extends PlaceJob>(
		stage: SearchStage,
		jobs: readonly Job[],
		take: (result: PlaceResults[Job['kind']], at: number) => void,
		count: (at: number) => number = () => 1
	): Promise<void> {
		const of = jobs.reduce((sum, _, at) => sum + count(at), 0);
		let next = 0;
		let done = 0;
		const serve = async (worker: PlaceWorker) => {
			for (let at = next++; at < jobs.length; at = next++) {
				const result = await Promise.race([worker(jobs[at]!), this.#stopped]);
				take(result, at);
				done += count(at);
				this.#onprogress?.({ stage, done, of, judged: this.judged, best: this.best });
			}
		};
		await Promise.all(this.#workers.map(serve));
	}

	#clear(found: readonly Suggestion[], most: number): Suggestion[] {
		return clearNiches(found, worth, nicheOf(this.#lengthM), most);
	}

	async #judge(
		stage: SearchStage,
		placements: readonly Placement[],
		fine: boolean,
		take: (some: readonly Suggestion[]) => void
	): Promise<void> {
		const jobs = Array.from({ length: Math.ceil(placements.length / AT_A_TIME) }, (_, i) => ({
			kind: 'judge' as const,
			placements: placements.slice(i * AT_A_TIME, (i + 1) * AT_A_TIME),
			fine
		}));
		await this.#each(
			stage,
			jobs,
			(minutes, at) => {
				this.judged += minutes.length;
				take(jobs[at]!.placements.map((one, i) => judgedAs(one, minutes[i]!, false)));
			},
			(at) => jobs[at]!.placements.length
		);
	}

	/** The whole field roughly; then the best of it, and the best of each niche, closer. */
	async #judgeField(field: readonly Placement[]): Promise<Suggestion[]> {
		const { closer, climbs, shown } = this.#effort;
		const rough: Suggestion[] = [];
		this.#rough = rough;
		await this.#judge('field', field, false, (some) => {
			rough.push(...some);
			this.best = this.#clear([...this.best, ...some], shown);
		});
		rough.sort(byWorth);
		const chosen = new Set([...rough.slice(0, closer), ...this.#clear(rough, climbs)]);
		const found: Suggestion[] = [];
		await this.#judge(
			'closer',
			[...chosen].map(({ placement }) => placement),
			true,
			(some) => found.push(...some)
		);
		this.best = this.#clear(found, shown);
		return found;
	}

	async #climb(starts: readonly Suggestion[], fieldSize: number): Promise<Suggestion[]> {
		const steps = firstSteps(this.#question, fieldSize);
		const summits: Suggestion[] = [];
		const jobs = starts.map(({ placement, minutes }) => {
			return { kind: 'climb' as const, from: placement, minutes, steps };
		});
		await this.#each('climb', jobs, (top) => {
			this.judged += top.judged;
			summits.push(judgedAs(tidied(this.#question, top.placement), top.minutes, true));
			this.best = this.#clear([...this.best, ...summits], this.#effort.shown);
		});
		return summits;
	}

	/** Of summits that no valley parts, as on a ridge, the best alone. */
	async #hills(summits: readonly Suggestion[]): Promise<Suggestion[]> {
		const { counted } = this.#effort;
		const { area } = this.#question;
		const hills: Suggestion[] = [];
		for (const summit of this.#clear(summits, summits.length)) {
			if (hills.length >= counted) break;
			const ways = hills.flatMap((hill) => {
				const way = wayBetween(hill.placement, summit.placement, area, this.#lengthM);
				return way ? [{ hill, way }] : [];
			});
			let own = true;
			const jobs = ways.map(({ way }) => ({ kind: 'judge' as const, placements: way, fine: true }));
			await this.#each('hills', jobs, (between, at) => {
				this.judged += between.length;
				own &&= valleyBetween(ways[at]!.hill.minutes, summit.minutes, between);
			});
			if (own) hills.push(summit);
		}
		this.best = hills.slice(0, this.#effort.shown);
		return hills;
	}

	/** With few hills, the best places elsewhere as well. */
	#withOthers(hills: readonly Suggestion[]): Suggestion[] {
		const all = [...hills];
		const elsewhere = elsewhereOf(this.#lengthM);
		for (const one of this.#rough) {
			if (all.length >= this.#effort.filled) break;
			const placement = tidied(this.#question, one.placement);
			if (
				one.minutes > 0 &&
				all.every((other) => apart(other.placement, placement, elsewhere) >= 1)
			) {
				all.push({ ...one, placement });
			}
		}
		return all;
	}

	async #count(tops: readonly Suggestion[]): Promise<void> {
		const counted = [...tops];
		const jobs = [null, ...tops].map((top) => {
			return { kind: 'count' as const, placement: top?.placement ?? null };
		});
		await this.#each('count', jobs, (totals, at) => {
			if (at === 0) this.present = totals;
			else counted[at - 1] = { ...counted[at - 1]!, totals };
			this.best = [...counted].sort(byWorth).slice(0, this.#effort.shown);
		});
		this.best = this.best.filter((one) => worth(one) > 0);
	}

	async #moveAbout(): Promise<void> {
		const jobs = this.best.map(({ placement }) => ({ kind: 'flatness' as const, placement }));
		await this.#each('flatness', jobs, (flatness, at) => {
			this.best = this.best.map((one, i) => (i === at ? { ...one, flatness } : one));
		});
	}
}

/**
 * Searches the best places for a curtain: judges a field of placements by the season's sky, the best of it
 * closer, climbs from the best of different niches, tells hills apart, counts them by the engine itself,
 * and measures how flat it is about the best. What is answered is in order of the engine's count.
 *
 * @param input.field placements to begin with, all standing in the area
 * @param input.workers as many jobs go on at once; each was made for this question
 * @param input.effort without climbs the best of the field itself are counted, near to each other or not
 * @param input.signal stops at once, whatever the workers are at; the best so far is answered
 * @param input.onprogress told after every job
 * @throws what a worker throws
 */
export async function searchPlaces(input: SearchInput): Promise<SearchResult> {
	const search = new Search(input);
	let stopped = false;
	try {
		await search.run(input.field);
	} catch (thrown) {
		if (!(thrown instanceof Stopped)) throw thrown;
		stopped = true;
	}
	const { best, present, sunMinutes, judged } = search;
	return { suggestions: best, present, sunMinutes, judged, stopped };
}
