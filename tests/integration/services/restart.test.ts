import { spawn } from 'node:child_process';
import { existsSync } from 'node:fs';
import { createInterface } from 'node:readline';
import pg from 'pg';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { inProject, typescriptArgs } from '../../../docker-free-dev/lib/paths.ts';
import { processesIn, sendSignal, startTicks } from '../../../docker-free-dev/lib/processes.ts';
import type { Service } from '../../../docker-free-dev/lib/supervise.ts';
import { startTestStack, type TestStack } from '../../../docker-free-dev/test-stack.ts';
import { caughtFor } from '../../support/letters.ts';
import { newAddress, PASSWORD } from '../../support/people.ts';
import { until } from '../../support/until.ts';
import { Visitor } from '../../support/visitor.ts';

let stack: TestStack;
let owner: Visitor;
let desk: string;

beforeAll(async () => {
	stack = await startTestStack(true, { demo: false, durable: true });
	owner = new Visitor(stack.origin);
	const email = newAddress();
	const fields = { email, password: PASSWORD, name: 'Juno Fell', operatorName: 'Kill Terrace' };
	expect((await owner.post('/sign-up', fields)).status).toBe(200);
	const confirmed = await owner.post(await linkTo(email), {});
	desk = confirmed.headers.get('location') ?? '';
	expect(desk).toMatch(/^\/desk\//);
});
afterAll(() => stack.stop());

/** The path of the link in the letter to an address, once the mail catcher has it. */
async function linkTo(email: string): Promise<string> {
	const [letter] = await letters(email);
	const link = letter?.text.split(/\s/).find((word) => word.startsWith(stack.origin)) ?? '';
	return link.slice(stack.origin.length);
}

const letters = (email: string) =>
	until(`a letter to ${email}`, async () => {
		const found = await caughtFor(email, stack.mail.address);
		return found.length > 0 ? found : null;
	});

/** Kills a service's process; answers when another one runs. */
async function kill(service: Service | undefined): Promise<void> {
	const pid = service?.pid();
	if (!pid) throw new Error('It is not running.');
	sendSignal(pid, 'SIGKILL');
	await until('the next process', async () => {
		const next = service?.pid();
		return next !== undefined && next !== pid;
	});
}

async function invite(): Promise<string> {
	const email = newAddress();
	const answer = await owner.post(`${desk}/members?/invite`, { email, role: 'planner' });
	expect(answer.status).toBe(200);
	return email;
}

const isReady = () =>
	until('readiness', async () => (await fetch(`${stack.origin}/readyz`)).status === 200);

test('a killed web server comes back, and who was signed in still is', async () => {
	const email = await invite();
	await kill(stack.web);
	await isReady();
	const page = await owner.get(`${desk}/members`);
	expect(page.status).toBe(200);
	expect(await page.text()).toContain(email);
});

test('a killed worker comes back and sends what was written meanwhile', async () => {
	const killed = kill(stack.worker);
	const email = await invite();
	await killed;
	expect(await letters(email)).toHaveLength(1);
});

test('a killed database comes back with all that was answered; a request meanwhile is late, not lost', async () => {
	const before = await invite();
	await kill(stack.database);
	// The next server has just begun and takes nobody yet. (What was under way at the kill itself is
	// answered as failed and undone as a whole.)
	const [page, during] = await Promise.all([owner.get(`${desk}/members`), invite()]);
	expect(page.status).toBe(200);
	expect(await page.text()).toContain(before);
	await isReady();
	// The worker lost its lock, ended and is back too: both letters leave.
	for (const email of [before, during]) expect(await letters(email)).toHaveLength(1);
});

test('a killed mail catcher comes back; the letter waits for it', async () => {
	const killed = kill(stack.mail);
	const email = await invite();
	await killed;
	expect(await letters(email)).toHaveLength(1);
});

test.each(['payments', 'forecast'] as const)('a killed double of %s comes back', async (name) => {
	await kill(stack[name]);
	await until('its answer', async () => {
		const response = await fetch(`${stack[name].address}/_double/health`);
		return response.status === 200;
	});
});

test('through all of it every invitation has its one letter', async () => {
	const client = new pg.Client({ connectionString: stack.database.urls.admin });
	await client.connect();
	try {
		const { rows } = await client.query(
			`select l.to_address from letter l where l.kind = 'invitation' and l.status = 'sent'`
		);
		const { rows: invitations } = await client.query('select email from invitation');
		expect(rows).toHaveLength(invitations.length);
	} finally {
		await client.end();
	}
});

test('killing the process that holds a stack ends all of it and leaves no folder', async () => {
	const child = spawn(
		process.execPath,
		[...typescriptArgs(), inProject('tests/support/stack-process.ts')],
		{ cwd: inProject(), stdio: ['ignore', 'pipe', 'inherit'] }
	);
	const line = await new Promise<string>((resolve, reject) => {
		createInterface({ input: child.stdout }).once('line', resolve);
		child.once('exit', (code) => reject(new Error(`It ended with ${code}.`)));
	});
	const { folders, pids, origin } = JSON.parse(line) as {
		folders: string[];
		pids: number[];
		origin: string;
	};
	expect(pids).toHaveLength(6);
	for (const pid of pids) expect(startTicks(pid)).toBeDefined();
	for (const folder of folders) expect(existsSync(folder), folder).toBe(true);
	child.kill('SIGKILL');
	await until('the end of all', async () => pids.every((pid) => startTicks(pid) === undefined));
	await until('the folders to vanish', async () => folders.every((one) => !existsSync(one)));
	expect(processesIn(`${folders[1]}/data`, 'postgres')).toEqual([]);
	await expect(fetch(origin)).rejects.toThrow();
});
