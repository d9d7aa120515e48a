import type { JobHelpers } from 'graphile-worker';
import { deleteExpired } from '../auth/housekeeping';
import { sendLetter } from '../mail/send';

/** What each kind of job carries. */
export interface TaskPayloads {
	send_letter: { letterId: string; operatorId: string | null };
	delete_expired: Record<string, never>;
}

/** How often a job was tried, this time included, and how often it may be. */
export interface Attempt {
	number: number;
	of: number;
}

type Handler<Payload> = (payload: Payload, attempt: Attempt) => Promise<void>;

/** The work behind each kind of job. Every handler may be run again after a crash in its middle. */
export const handlers: { [Task in keyof TaskPayloads]: Handler<TaskPayloads[Task]> } = {
	send_letter: sendLetter,
	delete_expired: deleteExpired
};

/** The attempt that graphile-worker's helpers speak of. */
export function attemptOf(helpers: JobHelpers): Attempt {
	return { number: helpers.job.attempts, of: helpers.job.max_attempts };
}
