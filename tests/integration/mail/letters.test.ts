import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import { inPublic, inTenant } from '../../../src/lib/server/db/transaction.ts';
import { startWorker, type Worker } from '../../../src/lib/server/jobs/worker.ts';
import { writeLetter, type NewLetter } from '../../../src/lib/server/mail/outbox.ts';
import { sendLetter } from '../../../src/lib/server/mail/send.ts';
import { anyFreePort } from '../../../docker-free-dev/lib/ports.ts';
import { adminQuery } from '../../support/database.ts';
import { lettersTo } from '../../support/letters.ts';
import { makeOperator, newAddress } from '../../support/people.ts';
import { emptyQueue, jobWithKey } from '../../support/queue.ts';
import { headerOf, startSmtpServer, type SmtpServer } from '../../support/smtp-server.ts';
import { until } from '../../support/until.ts';

const origin = { actor: { kind: 'worker', name: 'test' } } as const;
const FIRST_OF_MANY = { number: 1, of: 25 };

let smtpPort: number;
let smtp: SmtpServer | undefined;
beforeAll(async () => {
	smtpPort = await anyFreePort();
	// Read when the first letter is sent.
	process.env.SMTP_URL = `smtp://127.0.0.1:${smtpPort}`;
});
beforeEach(emptyQueue);
afterAll(() => smtp?.close());

async function mailServerUp(): Promise<SmtpServer> {
	smtp ??= await startSmtpServer(smtpPort);
	smtp.be('take');
	return smtp;
}

async function mailServerDown(): Promise<void> {
	await smtp?.close();
	smtp = undefined;
}

const letterTo = (to: string, more: Partial<NewLetter> = {}): NewLetter => ({
	kind: 'test',
	to,
	content: {
		subject: 'Your slot at Müller’s terrace',
		greeting: 'Hello <Juno> & "friends",',
		paragraphs: ['The bow stands at 08:10.'],
		action: { label: 'See the order', url: 'https://bowkeeper.example.org/order/abc' },
		from: 'Müller’s terrace'
	},
	...more
});

const write = (to: string, more: Partial<NewLetter> = {}) =>
	inPublic(origin, (tx) => writeLetter(tx, letterTo(to, more)));

const stored = async (to: string) => (await lettersTo(to))[0];

test('a letter and its job are written in the transaction that causes them, or not at all', async () => {
	const to = newAddress();
	let letterId = '';
	const undone = inPublic(origin, async (tx) => {
		letterId = await writeLetter(tx, letterTo(to));
		throw new Error('undone');
	});
	await expect(undone).rejects.toThrow('undone');
	expect(await lettersTo(to)).toEqual([]);
	expect(await jobWithKey(letterId)).toBeUndefined();

	letterId = await write(to);
	expect(await stored(to)).toMatchObject({ id: letterId, status: 'waiting', operatorId: null });
	// The job names the letter; whom it is for stands in the letter alone.
	expect((await jobWithKey(letterId))?.payload).toEqual({ letterId, operatorId: null });
});

test('an operator’s letter is the operator’s, and the platform’s is nobody else’s', async () => {
	const { operatorId } = await makeOperator();
	const [ours, platforms] = [newAddress(), newAddress()];
	await inTenant(operatorId, origin, (tx) => writeLetter(tx, letterTo(ours)));
	await write(platforms);
	expect((await stored(ours))?.operatorId).toBe(operatorId);
	const seen = await inTenant(operatorId, origin, (tx) => tx.sql.query.letter.findMany());
	expect(seen.map((letter) => letter.toAddress)).toEqual([ours]);
});

test('it goes out as plain text and HTML, with its headers and every sign as it was meant', async () => {
	const server = await mailServerUp();
	const to = newAddress();
	const letterId = await write(to);
	await sendLetter({ letterId, operatorId: null }, FIRST_OF_MANY);
	const [source = ''] = server.takenFor(to);
	expect(headerOf(source, 'Message-ID')).toBe((await stored(to))?.messageId);
	expect(headerOf(source, 'Subject')).toMatch(/^=\?UTF-8\?/);
	expect(headerOf(source, 'Auto-Submitted')).toBe('auto-generated');
	expect(headerOf(source, 'Content-Type')).toMatch(/^multipart\/alternative/);
	expect(source).toMatch(/Content-Type: text\/plain; charset=utf-8/);
	expect(source).toMatch(/Content-Type: text\/html; charset=utf-8/);
	const { text = '', html = '' } = (await stored(to)) ?? {};
	expect(text).toContain('Hello <Juno> & "friends",');
	expect(text).toContain('See the order:\nhttps://bowkeeper.example.org/order/abc');
	expect(html).toContain('Hello &lt;Juno&gt; &amp; &quot;friends&quot;,');
	expect(html).toContain('href="https://bowkeeper.example.org/order/abc"');
	expect(await stored(to)).toMatchObject({ status: 'sent', attempts: 1, lastError: null });
});

test('a letter that holds a right is wiped once it is sent, and no other', async () => {
	await mailServerUp();
	const [plain, secret] = [newAddress(), newAddress()];
	for (const to of [plain, secret]) {
		const letterId = await write(to, { wipeWhenSent: to === secret });
		await sendLetter({ letterId, operatorId: null }, FIRST_OF_MANY);
	}
	expect(await stored(secret)).toMatchObject({ status: 'sent', text: '', html: '' });
	expect((await stored(plain))?.text).not.toBe('');
});

test('a repeat carries the same Message-ID; a letter that is known to be sent is not repeated', async () => {
	const server = await mailServerUp();
	const to = newAddress();
	const job = { letterId: await write(to), operatorId: null };
	await sendLetter(job, FIRST_OF_MANY);
	await sendLetter(job, FIRST_OF_MANY);
	expect(server.takenFor(to)).toHaveLength(1);
	// A crash between the mail server's answer and the note of it.
	await adminQuery(`update letter set status = 'waiting', sent_at = null where id = $1`, [
		job.letterId
	]);
	await sendLetter(job, { number: 2, of: 25 });
	const sources = server.takenFor(to);
	expect(sources).toHaveLength(2);
	expect(new Set(sources.map((source) => headerOf(source, 'Message-ID'))).size).toBe(1);
});

test('what a refusing server says of the address is not kept', async () => {
	(await mailServerUp()).be('refuse');
	const to = newAddress();
	const letterId = await write(to);
	const attempt = sendLetter({ letterId, operatorId: null }, FIRST_OF_MANY);
	await expect(attempt).rejects.toThrow(/^mail server EENVELOPE 451$/);
	expect(await stored(to)).toMatchObject({
		status: 'waiting',
		attempts: 1,
		lastError: 'mail server EENVELOPE 451'
	});
});

test('after the last try it is given up, and a person can still have it sent', async () => {
	await mailServerDown();
	const to = newAddress();
	const job = { letterId: await write(to), operatorId: null };
	await expect(sendLetter(job, { number: 25, of: 25 })).rejects.toThrow('mail server ESOCKET');
	expect((await stored(to))?.status).toBe('given_up');
	await mailServerUp();
	await sendLetter(job, { number: 26, of: 26 });
	expect((await stored(to))?.status).toBe('sent');
});

test('while the mail server is down letters wait, and go out by themselves once it is back', async () => {
	await mailServerDown();
	const addresses = [newAddress(), newAddress(), newAddress()];
	for (const to of addresses) await write(to);
	const worker: Worker = await startWorker();
	try {
		for (const to of addresses) {
			await until('a failed try', async () => ((await stored(to))?.attempts ?? 0) >= 1);
			expect(await stored(to)).toMatchObject({
				status: 'waiting',
				lastError: 'mail server ESOCKET'
			});
		}
		const server = await mailServerUp();
		for (const to of addresses) {
			await until('the letter', async () => (await stored(to))?.status === 'sent');
			expect(server.takenFor(to)).toHaveLength(1);
		}
	} finally {
		await worker.stop();
	}
});
