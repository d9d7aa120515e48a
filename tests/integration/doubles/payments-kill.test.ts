import { spawn, type ChildProcess } from 'node:child_process';
import { appendFileSync, mkdtempSync, rmSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, expect, test } from 'vitest';
import { inProject, typescriptArgs } from '../../../docker-free-dev/lib/paths.ts';
import { clientFor, order, SECRET, startReceiver } from './payment-helpers.ts';

let stateDir: string;
let shop: Awaited<ReturnType<typeof startReceiver>>;
const running: ChildProcess[] = [];

beforeEach(async () => {
	stateDir = mkdtempSync(path.join(os.tmpdir(), 'payment-double-'));
	shop = await startReceiver();
});
afterEach(async () => {
	await Promise.all(running.splice(0).map(killed));
	await shop.close();
	rmSync(stateDir, { recursive: true, force: true });
});

/** Runs the double as a process of its own; answers when it says its address. */
async function startProcess(args: string[]): Promise<{ child: ChildProcess; address: string }> {
	const child = spawn(
		process.execPath,
		[...typescriptArgs(), inProject('docker-free-dev/double.ts'), ...args],
		{
			stdio: ['ignore', 'pipe', 'inherit'],
			env: {
				PATH: process.env.PATH,
				PAYMENT_WEBHOOK_URL: shop.url,
				PAYMENT_WEBHOOK_SECRET: SECRET,
				PAYMENT_SECRET_KEY: 'sk_test_of_the_test'
			}
		}
	);
	running.push(child);
	const address = await new Promise<string>((resolve, reject) => {
		child.stdout?.on('data', (chunk: Buffer) => {
			const found = /http:\/\/\S+/.exec(chunk.toString());
			if (found) resolve(found[0]);
		});
		child.once('exit', (code) => reject(new Error(`It ended with ${code}.`)));
	});
	return { child, address };
}

async function killed(child: ChildProcess): Promise<void> {
	if (child.exitCode !== null || child.signalCode !== null) return;
	const gone = new Promise((resolve) => child.once('exit', resolve));
	child.kill('SIGKILL');
	await gone;
}

test('everything answered for survives a kill: state, keys, events on their way, what is due', async () => {
	const flags = ['payments', '--port', '0', '--state', stateDir];
	const first = await startProcess(flags);
	const stripe = clientFor(first.address);
	shop.answer(500);
	const account = await stripe.accounts.create({ type: 'express' });
	const on = { stripeAccount: account.id };
	const key = { ...on, idempotencyKey: 'before-the-kill' };
	const session = await stripe.checkout.sessions.create(order(4200), key);
	const paid = await fetch(`${first.address}/_double/checkout/${session.id}/pay`, {
		method: 'POST',
		body: JSON.stringify({ card: '4000000000005126' })
	});
	expect(paid.status).toBe(200);
	const intent = String(((await paid.json()) as Record<string, unknown>).payment_intent);
	const refund = await stripe.refunds.create({ payment_intent: intent }, on);
	const balance = await stripe.balance.retrieve({}, on);
	await killed(first.child);
	// What a kill in the middle of writing leaves.
	appendFileSync(path.join(stateDir, 'journal.jsonl'), '[["charge","acct');

	shop.answer(200);
	const second = await startProcess(flags);
	const after = clientFor(second.address);
	const replayed = await after.checkout.sessions.create(order(4200), key);
	expect(replayed.id).toBe(session.id);
	expect(replayed.lastResponse.headers['idempotent-replayed']).toBe('true');
	expect(await after.balance.retrieve({}, on)).toMatchObject({ available: balance.available });
	expect((await after.paymentIntents.retrieve(intent, {}, on)).status).toBe('succeeded');
	// The events and the failing refund, both pending at the kill, come by themselves.
	await shop.until((events) => events.some((e) => e.type === 'checkout.session.completed'));
	await shop.until((events) => events.some((e) => e.type === 'refund.failed'));
	expect((await after.refunds.retrieve(refund.id, {}, on)).status).toBe('failed');
});

test.each([
	[['payments', '--port', 'many', '--state', 'x'], '--port'],
	[['payments', '--port', '0'], '--state'],
	[['forecast', '--port', '0', '--state', 'x'], '--state'],
	[['weather'], 'weather'],
	[['payments', '--colour'], '--colour'],
	[[], 'Which double']
])('a wrong command line %j is refused with code 2 and a reason', async (args, word) => {
	const child = spawn(
		process.execPath,
		[...typescriptArgs(), inProject('docker-free-dev/double.ts'), ...args],
		{ stdio: ['ignore', 'ignore', 'pipe'] }
	);
	let said = '';
	child.stderr.on('data', (chunk: Buffer) => (said += chunk.toString()));
	const code = await new Promise((resolve) => child.once('close', resolve));
	expect(code).toBe(2);
	expect(said).toContain(word);
});

test('one folder of state serves one double at a time', async () => {
	await startProcess(['payments', '--port', '0', '--state', stateDir]);
	await expect(startProcess(['payments', '--port', '0', '--state', stateDir])).rejects.toThrow(
		/ended with 1/
	);
});
