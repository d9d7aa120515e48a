import { afterAll, afterEach, beforeAll, beforeEach, expect, test } from 'vitest';
import { inPlatform, inPublic } from '../../../src/lib/server/db/transaction.ts';
import { addJob } from '../../../src/lib/server/jobs/add.ts';
import { listJobs, queueHealth, retryJob } from '../../../src/lib/server/jobs/admin.ts';
import { startWorker, type Worker } from '../../../src/lib/server/jobs/worker.ts';
import { writeLetter } from '../../../src/lib/server/mail/outbox.ts';
import { sendSignal } from '../../../docker-free-dev/lib/processes.ts';
import { adminQuery } from '../../support/database.ts';
import { lettersTo } from '../../support/letters.ts';
import { newAddress } from '../../support/people.ts';
import { startTestWorker, type TestProcess } from '../../support/processes.ts';
import { emptyQueue, jobWithKey } from '../../support/queue.ts';
import { headerOf, startSmtpServer, type SmtpServer } from '../../support/smtp-server.ts';
import { until } from '../../support/until.ts';

/** Sending a letter is the job at hand here: what it meets is the mail server's mood. */
const origin = { actor: { kind: 'worker', name: 'test' } } as const;
const platform = { actor: { kind: 'platform', userId: null, name: 'test' } } as const;

let smtp: SmtpServer;
const workers: (Worker | TestProcess)[] = [];
beforeAll(async () => {
	smtp = await startSmtpServer();
	process.env.SMTP_URL = smtp.url;
});
beforeEach(async () => {
	await emptyQueue();
	smtp.be('take');
});
afterEach(async () => {
	for (const worker of workers.splice(0)) await worker.stop();
});
afterAll(() => smtp.close());

async function work(): Promise<void> {
	workers.push(await startWorker());
}

async function workInProcess(): Promise<TestProcess> {
	const worker = await startTestWorker({ SMTP_URL: smtp.url });
	workers.push(worker);
	return worker;
}

const letterTo = (to: string) => ({
	kind: 'test',
	to,
	content: { subject: 'A job', greeting: 'Hello,', paragraphs: ['It ran.'], from: 'Bowkeeper' }
});

const write = (to: string) => inPublic(origin, (tx) => writeLetter(tx, letterTo(to)));
const statusOf = async (to: string) => (await lettersTo(to))[0]?.status;
const isSent = (to: string) => async () => (await statusOf(to)) === 'sent';

test('a job runs after the commit of what caused it, and never when that is undone', async () => {
	await work();
	const [kept, undone] = [newAddress(), newAddress()];
	await inPublic(origin, async (tx) => {
		await writeLetter(tx, letterTo(kept));
		// The worker is idle and told of each job: were this one to be seen, it would run now.
		expect(await statusOf(kept)).toBeUndefined();
	});
	const failing = inPublic(origin, async (tx) => {
		await writeLetter(tx, letterTo(undone));
		throw new Error('undone');
	});
	await expect(failing).rejects.toThrow('undone');
	await until('the letter', isSent(kept));
	expect(smtp.takenFor(kept)).toHaveLength(1);
	expect(smtp.takenFor(undone)).toEqual([]);
});

test('a job that is due later waits, and one with the same key takes its place', async () => {
	const runAt = new Date(Date.now() + 3_600_000);
	const add = (letterId: string) =>
		inPublic(origin, (tx) =>
			addJob(tx, 'send_letter', { letterId, operatorId: null }, { key: 'one of a kind', runAt })
		);
	expect(await add('first')).toBe(await add('second'));
	const job = await jobWithKey('one of a kind');
	expect(job?.payload).toEqual({ letterId: 'second', operatorId: null });
	expect(job?.runAt.getTime()).toBe(runAt.getTime());
});

test('a job that fails is tried again, each time after a longer wait', async () => {
	smtp.be('refuse');
	await work();
	const to = newAddress();
	const letterId = await write(to);
	const waits: number[] = [];
	for (const attempts of [1, 2, 3]) {
		const job = await until(`try ${attempts}`, async () => {
			const found = await jobWithKey(letterId);
			return found?.attempts === attempts && !found.lockedBy ? found : null;
		});
		waits.push(job.runAt.getTime() - Date.now());
		expect(job.lastError).toBe('mail server EENVELOPE 451');
		// A person does not wait for it.
		if (attempts < 3) await inPlatform(platform, (tx) => retryJob(tx, job.id));
	}
	// graphile-worker: exp(attempts) seconds.
	expect(waits[0]).toBeGreaterThan(1_000);
	expect(waits[1]).toBeGreaterThan((waits[0] ?? 0) * 2);
	expect(waits[2]).toBeGreaterThan((waits[1] ?? 0) * 2);
	smtp.be('take');
	const job = await jobWithKey(letterId);
	await inPlatform(platform, (tx) => retryJob(tx, job?.id ?? ''));
	await until('the letter', isSent(to));
	expect(await jobWithKey(letterId)).toBeUndefined();
});

test('a job that has used up its tries is listed, and a person has it tried once more', async () => {
	smtp.be('refuse');
	await work();
	const to = newAddress();
	await inPublic(origin, async (tx) => {
		const letterId = await writeLetter(tx, letterTo(to));
		const options = { key: letterId, maxAttempts: 1 };
		await addJob(tx, 'send_letter', { letterId, operatorId: null }, options);
	});
	await until('the last try', async () => (await statusOf(to)) === 'given_up');
	const look = () =>
		inPlatform(platform, async (tx) => ({
			failed: await listJobs(tx, { onlyFailed: true, most: 10, skip: 0 }),
			health: await queueHealth(tx)
		}));
	const { failed, health } = await until('the end of the try', async () => {
		const seen = await look();
		return seen.failed[0]?.running === false ? seen : null;
	});
	expect(failed).toHaveLength(1);
	expect(failed[0]).toMatchObject({
		task: 'send_letter',
		attempts: 1,
		maxAttempts: 1,
		lastError: 'mail server EENVELOPE 451'
	});
	expect(health).toMatchObject({ waiting: 0, failed: 0, givenUp: 1, oldestDueSeconds: 0 });

	smtp.be('take');
	const id = failed[0]?.id ?? '';
	expect(await inPlatform(platform, (tx) => retryJob(tx, id))).toBe(true);
	await until('the letter', isSent(to));
	expect((await look()).failed).toEqual([]);
	expect(await inPlatform(platform, (tx) => retryJob(tx, id))).toBe(false);
});

test('a worker killed in the middle of a job: the next one does it, and it is recognisably the same', async () => {
	smtp.be('hang');
	const worker = await workInProcess();
	const to = newAddress();
	const letterId = await write(to);
	await smtp.hung;
	expect((await jobWithKey(letterId))?.lockedBy).toBeTruthy();
	// While it runs nobody can have it run a second time.
	const { id = '' } = (await jobWithKey(letterId)) ?? {};
	expect(await inPlatform(platform, (tx) => retryJob(tx, id))).toBe(false);

	smtp.be('take');
	const pid = worker.pid() ?? 0;
	sendSignal(pid, 'SIGKILL');
	await until('the letter', isSent(to));
	expect(worker.pid()).not.toBe(pid);
	const [source = ''] = smtp.takenFor(to);
	expect(headerOf(source, 'Message-ID')).toBe((await lettersTo(to))[0]?.messageId);
	expect(await jobWithKey(letterId)).toBeUndefined();
});

test('a worker that is asked to stop finishes what it does', async () => {
	smtp.be('hang');
	const worker = await workInProcess();
	const to = newAddress();
	await write(to);
	await smtp.hung;
	const stopped = worker.stop();
	// The mail server answers late; the letter is noted as sent before the process ends.
	smtp.answerLate();
	await stopped;
	expect(await statusOf(to)).toBe('sent');
	expect(worker.log()).toContain('worker stopped');
});

test('a second worker stands by, and takes over when the first is gone', async () => {
	const first = await workInProcess();
	let secondStarted = false;
	const second = startWorker().then((worker) => {
		workers.push(worker);
		secondStarted = true;
	});
	const waiting = () =>
		adminQuery(`select 1 from pg_locks where locktype = 'advisory' and not granted`);
	await until('the second worker at the lock', async () => (await waiting()).length === 1);
	expect(secondStarted).toBe(false);
	await first.stop();
	await second;
	const to = newAddress();
	await write(to);
	await until('the letter', isSent(to));
});

test('no job carries an address', async () => {
	await write(newAddress());
	const jobs = await adminQuery<{ text: string }>(
		'select j::text as text from graphile_worker._private_jobs j'
	);
	expect(jobs).toHaveLength(1);
	expect(jobs[0]?.text).not.toContain('@');
});
