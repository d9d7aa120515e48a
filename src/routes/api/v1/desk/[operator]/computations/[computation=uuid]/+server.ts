import { progressAnswer } from '$lib/schemas/api';
import { answerJson } from '$lib/server/api';
import { demandComputation } from '$lib/server/sites/compute';
import { inDesk } from '$lib/server/http';
import type { RequestHandler } from './$types';

/** How far a computation of windows is. */
export const GET: RequestHandler = (event) =>
	answerJson(event, () =>
		inDesk(event, async (tx) =>
			progressAnswer.parse(await demandComputation(tx, event.params.computation))
		)
	);
