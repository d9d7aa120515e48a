import type { PlaceQuestion } from '../question';
import { PlaceWork } from '../work';
import type { PlaceAnswer, PlaceRequest } from './messages';

/** Does a search's jobs beside the page. It is ended when the search is, in the middle of a job too. */

let question: PlaceQuestion | null = null;
let work: PlaceWork | null = null;

const answer = (told: PlaceAnswer) => self.postMessage(told);

self.onmessage = ({ data }: MessageEvent<PlaceRequest>) => {
	if (data.kind === 'question') {
		question = data.question;
		work = null;
		return;
	}
	try {
		if (!question) throw new Error('a job came before its question');
		work ??= new PlaceWork(question);
		answer({ kind: 'result', result: work.do(data.job) });
	} catch (thrown) {
		answer({ kind: 'fault', message: thrown instanceof Error ? thrown.message : String(thrown) });
	}
};
