import { jobIdSchema } from '$lib/schemas/people';
import { Refusal } from '$lib/server/failures';
import { emptyForm, handleForm, inAdministration } from '$lib/server/http';
import { listJobs, queueHealth, retryJob } from '$lib/server/jobs/admin';
import { addToTrail } from '$lib/server/audit/trail';
import type { Actions, PageServerLoad } from './$types';

const most = 50;

export const load: PageServerLoad = async (event) => {
	const all = event.url.searchParams.get('show') === 'all';
	const pageNumber = Math.max(1, Math.trunc(Number(event.url.searchParams.get('page')) || 1));
	return {
		...(await inAdministration(event, async (tx) => ({
			jobs: await listJobs(tx, { onlyFailed: !all, most, skip: (pageNumber - 1) * most }),
			health: await queueHealth(tx)
		}))),
		all,
		pageNumber,
		most,
		form: await emptyForm(jobIdSchema)
	};
};

export const actions: Actions = {
	default: (event) =>
		handleForm(event, jobIdSchema, async ({ jobId }) => {
			await inAdministration(event, async (tx) => {
				if (!(await retryJob(tx, jobId))) {
					throw new Refusal('conflict', 'This job is done, or is running just now.');
				}
				await addToTrail(tx, { action: 'job.retried', subject: { type: 'job', id: jobId } });
			});
			return `Job ${jobId} is tried again now.`;
		})
};
