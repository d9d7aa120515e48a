import { afterAll, afterEach, beforeAll, expect, test, vi } from 'vitest';
import { anyFreePort } from '../../../docker-free-dev/lib/ports.ts';
import { readiness } from '../../../src/lib/server/health.ts';
import { adminQuery } from '../../support/database.ts';
import { makePerson } from '../../support/people.ts';
import { startTestWeb, startTestWorker, type TestProcess } from '../../support/processes.ts';
import { emptyQueue } from '../../support/queue.ts';
import { startSmtpServer } from '../../support/smtp-server.ts';
import { until } from '../../support/until.ts';
import { Visitor } from '../../support/visitor.ts';

const METRICS_TOKEN = 'a token of sixteen or more';

let web: TestProcess;
beforeAll(async () => {
	web = await startTestWeb({ METRICS_TOKEN });
});
afterAll(() => web.stop());
afterEach(emptyQueue);

interface LogLine {
	level: number;
	msg: string;
	requestId?: string;
	route?: string;
	status?: number;
}

const lines = (log: string): LogLine[] =>
	log
		.split('\n')
		.filter((line) => line.startsWith('{'))
		.map((line) => JSON.parse(line) as LogLine);

test('healthz says that the process answers, and readyz what it stands on', async () => {
	const health = await fetch(`${web.address}/healthz`);
	expect([health.status, await health.text()]).toEqual([200, 'ok\n']);
	const ready = await fetch(`${web.address}/readyz`);
	expect(ready.status).toBe(200);
	expect(await ready.json()).toEqual({
		ready: true,
		database: 'ok',
		migrations: 'ok',
		queue: 'ok'
	});
});

test('a database that was not migrated as far as the code is not ready', async () => {
	const newest = `(select max(created_at) from drizzle.__drizzle_migrations)`;
	await adminQuery(
		`update drizzle.__drizzle_migrations set created_at = created_at - 1e12 where created_at = ${newest}`
	);
	try {
		const ready = await fetch(`${web.address}/readyz`);
		expect(ready.status).toBe(503);
		expect(await ready.json()).toMatchObject({ ready: false, migrations: 'behind' });
	} finally {
		await adminQuery(
			`update drizzle.__drizzle_migrations set created_at = created_at + 1e12
			where created_at = (select min(created_at) from drizzle.__drizzle_migrations)`
		);
	}
	expect((await fetch(`${web.address}/readyz`)).status).toBe(200);
});

test('a queue that nobody works is said, and the web server still serves', async () => {
	await adminQuery(
		`select graphile_worker.add_job('delete_expired', '{}', run_at => now() - interval '3 minutes')`
	);
	const ready = await fetch(`${web.address}/readyz`);
	expect(ready.status).toBe(200);
	expect(await ready.json()).toMatchObject({ ready: true, queue: 'late' });
});

test('a database that is away is said within the patience of a probe', async () => {
	const before = process.env.DATABASE_URL;
	vi.resetModules();
	process.env.DATABASE_URL = `postgres://nobody@127.0.0.1:${await anyFreePort()}/none`;
	try {
		const fresh = await import('../../../src/lib/server/health.ts');
		const began = performance.now();
		expect(await fresh.readiness()).toMatchObject({ ready: false, database: 'away' });
		expect(performance.now() - began).toBeLessThan(4_000);
	} finally {
		process.env.DATABASE_URL = before;
		vi.resetModules();
	}
	expect(await readiness()).toMatchObject({ ready: true });
});

test('metrics are for who holds the token, and count what was answered', async () => {
	const ask = (authorization?: string) =>
		fetch(`${web.address}/metrics`, { headers: authorization ? { authorization } : {} });
	expect((await ask()).status).toBe(404);
	expect((await ask('Bearer something else')).status).toBe(404);
	const response = await ask(`Bearer ${METRICS_TOKEN}`);
	expect(response.headers.get('content-type')).toContain('text/plain');
	const text = await response.text();
	expect(text).toMatch(/bowkeeper_http_requests_total\{class="4xx"\} [1-9]/);
	expect(text).toMatch(/bowkeeper_http_request_seconds_count\{method="GET",route="\/readyz"/);
	expect(text).toMatch(/bowkeeper_queue_jobs\{state="waiting"\} 0/);
	expect(text).toMatch(/bowkeeper_database_connections\{state="idle"\}/);
});

test('without a token, metrics answer on loopback', async () => {
	const open = await startTestWeb();
	try {
		expect((await fetch(`${open.address}/metrics`)).status).toBe(200);
	} finally {
		await open.stop();
	}
});

test('each request is logged under the id it was answered with, by its pattern and not its address', async () => {
	const visitor = new Visitor(web.address);
	const token = 'a-token-that-opens-an-account';
	const answered = await visitor.get(`/forgotten/${token}?from=juno`);
	const id = answered.headers.get('x-request-id');
	const found = await until('the line', async () =>
		lines(web.log()).find((line) => line.requestId === id)
	);
	expect(found).toMatchObject({ msg: 'request', route: '/forgotten/[token]', status: 200 });
	expect(web.log()).not.toContain(token);
	expect(web.log()).not.toContain('juno');
});

test('what a guard refuses or sends elsewhere is logged and counted too', async () => {
	await new Visitor(web.address).get('/desk/nowhere');
	await new Visitor(web.address).post('/sign-in', { email: 'a'.repeat(300_000) });
	await until('both lines', async () => {
		const seen = lines(web.log()).map((line) => `${line.route} ${line.status}`);
		return seen.includes('/desk/[operator] 303') && seen.includes('/sign-in 413');
	});
});

test('no log holds an address of a person, whatever fails', async () => {
	const person = await makePerson('Juno Fernweh');
	const visitor = new Visitor(web.address);
	const { email, password } = person;
	await visitor.post('/sign-in', { email, password: 'wrong password' });
	await visitor.post('/forgotten', { email });
	await visitor.post('/sign-up', { email, password, name: 'Juno Fernweh', operatorName: 'O' });
	// A failing statement repeats its parameters in its error.
	await adminQuery('revoke select on "user" from bowkeeper_app');
	try {
		const failed = await visitor.post('/sign-in', { email, password });
		expect(failed.status).toBe(500);
		const page = await failed.text();
		const id = failed.headers.get('x-request-id') ?? '';
		expect(page).toContain(id);
		expect(page).not.toContain('permission denied');
		const line = await until('the fault', async () =>
			lines(web.log()).find((one) => one.requestId === id && one.level === 50)
		);
		expect(line).toMatchObject({ msg: 'request failed', err: { code: '42501' } });
	} finally {
		await adminQuery('grant select on "user" to bowkeeper_app');
	}
	expect(web.log()).not.toMatch(/example\.org|Fernweh/);
});

test('the worker’s log and its last errors hold no address either', async () => {
	const smtp = await startSmtpServer();
	smtp.be('refuse');
	const worker = await startTestWorker({ SMTP_URL: smtp.url });
	try {
		const { email } = await makePerson();
		await new Visitor(web.address).post('/forgotten', { email });
		const errors = () =>
			adminQuery<{ error: string }>(
				`select last_error as error from graphile_worker._private_jobs where last_error is not null`
			);
		const [failed] = await until('a failed job', async () => {
			const all = await errors();
			return all.length > 0 ? all : null;
		});
		expect(failed?.error).toBe('mail server EENVELOPE 451');
		expect(worker.log()).toContain('job failed');
		expect(worker.log()).not.toContain('example.org');
	} finally {
		await worker.stop();
		await smtp.close();
	}
});
