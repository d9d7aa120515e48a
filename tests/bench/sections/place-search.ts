import { fork } from 'node:child_process';
import { createSite, type Site } from '../../../src/lib/optics';
import { ringFrame } from '../../../src/lib/optics/ring';
import { Sight } from '../../../src/lib/optics/sight';
import { placementField } from '../../../src/lib/place-search/field';
import type { PlaceQuestion } from '../../../src/lib/place-search/question';
import { FIELD_SIZE, searchPlaces, type PlaceWorker } from '../../../src/lib/place-search/search';
import { PlaceWork } from '../../../src/lib/place-search/work';
import { terraceQuestion } from '../../support/place-question';
import { fourByFour, quarryTerrace } from '../../support/plans';
import { median, medianTimesMs, type Measure, type Section } from '../measure';

/** What is asked of a search: so many placements over a season, in so long, on two cores. */
const ASKED = 2000;
const ALLOWED_S = 60;
/** Whole searches of the busy plan take longer: one is enough. */
const SEARCHES = { example: 3, busy: 1 };

/** A process as a search's worker; it is given one job at a time. */
function workerOf(question: PlaceQuestion): { worker: PlaceWorker; end: () => void } {
	const child = fork(new URL('./place-worker.ts', import.meta.url), {
		serialization: 'advanced'
	});
	child.send(question);
	const worker: PlaceWorker = (job) =>
		new Promise((resolve, reject) => {
			child.once('exit', reject);
			child.once('message', (result) => {
				child.off('exit', reject);
				resolve(result as never);
			});
			child.send(job);
		});
	return { worker, end: () => child.kill() };
}

/** Seconds of a whole search with some workers, from nothing to the last figure, and of its field. */
async function search(question: PlaceQuestion, workers: number) {
	const startMs = performance.now();
	const field = placementField(question.area, question.curtain.lengthM, FIELD_SIZE);
	const pool = Array.from({ length: workers }, () => workerOf(question));
	let fieldS = 0;
	let askedS = 0;
	const { judged } = await searchPlaces({
		question,
		field,
		workers: pool.map(({ worker }) => worker),
		onprogress: ({ stage, done }) => {
			const atS = (performance.now() - startMs) / 1000;
			if (stage === 'field') fieldS = atS;
			if (stage === 'field' && done >= ASKED && askedS === 0) askedS = atS;
		}
	});
	const allS = (performance.now() - startMs) / 1000;
	pool.forEach(({ end }) => end());
	return { askedS, fieldS, allS, judged };
}

/** Suns under which looks are timed. */
const SUNS = 2000;

/** Looks of every eye of the zone at the first curtain, under many suns. */
function looks(site: Site): number {
	const sight = new Sight(
		{ curtains: site.curtains.slice(0, 1), walls: site.walls },
		site.zones[0]!.eyes
	);
	let sum = 0;
	for (let i = 0; i < SUNS; i++) {
		const part = i / SUNS;
		sight.setSun(ringFrame({ azimuthDeg: 80 + 120 * part, altitudeDeg: 5 + 40 * part }));
		for (let e = 0; e < sight.eyes.length; e++) sum += sight.arcDeg(e);
	}
	return sum;
}

/** What one worker does in a field, held against as many bare looks as could settle it at the least. */
function oneWorker(question: PlaceQuestion): {
	perS: number;
	askedOver: number;
	overLeast: number;
} {
	const site = createSite(question.plan);
	const work = new PlaceWork(question);
	const field = placementField(question.area, question.curtain.lengthM, ASKED).slice(0, 250);
	const times = medianTimesMs(
		{
			judge: () => field.forEach((one) => work.judge.coarseMinutes(one)),
			looks: () => looks(site)
		},
		5
	);
	const { eyesAsked, eyesNeeded } = work.judge;
	// One round more than those that count, for the code to be warm.
	const neededInARound = eyesNeeded / 6;
	const looksInARound = SUNS * site.zones[0]!.eyes.length;
	return {
		perS: (field.length / times.judge) * 1000,
		askedOver: eyesAsked / eyesNeeded,
		overLeast: (times.ratios('judge', 'looks') * looksInARound) / neededInARound
	};
}

async function run(): Promise<Measure[]> {
	const measures: Measure[] = [];
	const plans = { example: quarryTerrace(), busy: fourByFour() };
	for (const name of ['example', 'busy'] as const) {
		const question = terraceQuestion(plans[name]);
		const { perS, askedOver, overLeast } = oneWorker(question);
		const rounds: Awaited<ReturnType<typeof search>>[] = [];
		for (let i = 0; i < SEARCHES[name]; i++) rounds.push(await search(question, 2));
		const middle = (key: 'askedS' | 'fieldS' | 'allS' | 'judged') =>
			median(rounds.map((round) => round[key]));
		measures.push(
			{
				name: `${name} plan: placements judged over 214 days, one worker`,
				value: perS,
				unit: '/s'
			},
			{
				name: `${name} plan: eyes asked against the least that settle`,
				value: askedOver,
				unit: 'x'
			},
			{ name: `${name} plan: time against that of the least looks`, value: overLeast, unit: 'x' },
			{
				name: `${name} plan: ${ASKED} placements with two workers, from nothing (at most ${ALLOWED_S})`,
				value: middle('askedS'),
				unit: 's'
			},
			{ name: `${name} plan: the whole search with two workers`, value: middle('allS'), unit: 's' },
			{ name: `${name} plan: placements judged in it`, value: middle('judged'), unit: '' }
		);
	}
	return measures;
}

/** The search for a curtain's place: a season of 214 days, opening hours from 9 to 18 o'clock. */
export const placeSearchSection: Section = { name: 'place-search', run };
