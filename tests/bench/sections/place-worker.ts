import type { PlaceQuestion } from '../../../src/lib/place-search/question';
import { PlaceWork, type PlaceJob } from '../../../src/lib/place-search/work';

/** A process that does the jobs of one question, as a browser's worker does: the question comes first. */
let work: PlaceWork | null = null;
process.on('message', (message) => {
	if (work) process.send!(work.do(message as PlaceJob));
	else work = new PlaceWork(message as PlaceQuestion);
});
