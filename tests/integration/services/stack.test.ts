import pg from 'pg';
import { createTransport } from 'nodemailer';
import { afterAll, expect, test } from 'vitest';
import { parseEnv } from '../../../src/lib/server/env.ts';

const clients: pg.Client[] = [];

async function connect(variable: string): Promise<pg.Client> {
	const client = new pg.Client({ connectionString: process.env[variable] });
	clients.push(client);
	await client.connect();
	return client;
}

afterAll(() => Promise.all(clients.map((client) => client.end())));

test('the environment of the tests is one that the application accepts', () => {
	expect(() => parseEnv(process.env)).not.toThrow();
});

test('the application role owns nothing, makes nothing and stays under row-level security', async () => {
	const app = await connect('DATABASE_URL');
	const { rows } = await app.query(
		'select rolname, rolsuper, rolbypassrls, rolcreaterole, rolcreatedb from pg_roles where rolname = current_user'
	);
	expect(rows).toEqual([
		{
			rolname: 'bowkeeper_app',
			rolsuper: false,
			rolbypassrls: false,
			rolcreaterole: false,
			rolcreatedb: false
		}
	]);
	await expect(app.query('create schema mine')).rejects.toThrow(/permission denied/);
	await expect(app.query('create table public.mine (a int)')).rejects.toThrow(/permission denied/);
});

test('the queue role may make its own schema and can not write the owner’s', async () => {
	const queue = await connect('DATABASE_QUEUE_URL');
	await queue.query('begin');
	await queue.query('create schema proof_of_queue');
	await queue.query('rollback');
	await expect(queue.query('create table public.mine (a int)')).rejects.toThrow(
		/permission denied/
	);
});

test('the owner makes tables and the extension that slots need, and is no superuser', async () => {
	const owner = await connect('DATABASE_OWNER_URL');
	await owner.query('begin');
	await owner.query('create extension if not exists btree_gist');
	await owner.query('create table public.proof_of_owner (a int)');
	await owner.query('rollback');
	const { rows } = await owner.query(
		'select rolsuper, rolbypassrls from pg_roles where rolname = current_user'
	);
	expect(rows).toEqual([{ rolsuper: false, rolbypassrls: false }]);
});

test('a letter sent by SMTP is found in the mail catcher', async () => {
	const subject = `Proof ${crypto.randomUUID()}`;
	await createTransport(process.env.SMTP_URL ?? '').sendMail({
		from: process.env.MAIL_FROM,
		to: 'visitor@example.test',
		subject,
		text: 'A letter.'
	});
	const response = await fetch(`${process.env.TEST_MAIL_API}/email`);
	const letters = (await response.json()) as { subject: string }[];
	expect(letters.filter((letter) => letter.subject === subject)).toHaveLength(1);
});
