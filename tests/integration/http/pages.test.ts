import { afterAll, beforeAll, expect, test } from 'vitest';
import { adminQuery } from '../../support/database.ts';
import { makeOperator, type Operator } from '../../support/people.ts';
import { startTestWeb, type TestProcess } from '../../support/processes.ts';
import { Visitor } from '../../support/visitor.ts';

let web: TestProcess;
let operator: Operator;
beforeAll(async () => {
	web = await startTestWeb();
	operator = await makeOperator('Header Terrace');
});
afterAll(() => web.stop());

const visitor = () => new Visitor(web.address);

async function signedIn(): Promise<Visitor> {
	const one = visitor();
	const { email, password } = operator.owner;
	const response = await one.post('/sign-in', { email, password });
	expect(response.status).toBe(303);
	return one;
}

test('a page lets nothing run but what it brought itself', async () => {
	const nonces = new Set<string>();
	for (const path of ['/', '/sign-in', '/sign-up', '/nowhere']) {
		const response = await visitor().get(path);
		const policy = response.headers.get('content-security-policy') ?? '';
		const nonce = /script-src 'self' 'nonce-([^']+)'/.exec(policy)?.[1] ?? '';
		expect(nonce, `${path}: ${policy}`).not.toBe('');
		nonces.add(nonce);
		expect(policy).toContain("default-src 'self'");
		expect(policy).toContain("frame-ancestors 'none'");
		expect(policy).toContain("object-src 'none'");
		expect(policy).toContain("base-uri 'none'");
		expect(policy).toContain("form-action 'self'");
		expect(policy).not.toContain("script-src 'self' 'unsafe");
		const html = await response.text();
		for (const [tag] of html.matchAll(/<script[^>]*>/g)) expect(tag).toContain(`nonce="${nonce}"`);
		expect(html).not.toMatch(/\son[a-z]+=|javascript:/i);
	}
	// A nonce that can be foretold is none.
	expect(nonces.size).toBe(4);
});

test('every page says how it may be used, and that it is what it says', async () => {
	for (const path of ['/', '/sign-in', '/nowhere', '/healthz']) {
		const { headers } = await visitor().get(path);
		expect(headers.get('x-content-type-options'), path).toBe('nosniff');
		expect(headers.get('referrer-policy')).toBe('strict-origin-when-cross-origin');
		expect(headers.get('permissions-policy')).toContain('geolocation=()');
		expect(headers.get('cross-origin-opener-policy')).toBe('same-origin');
		expect(headers.get('x-request-id')).toMatch(/^[0-9a-f-]{36}$/);
		// Only under TLS.
		expect(headers.get('strict-transport-security')).toBeNull();
	}
});

test('under TLS the browser is told to stay there, and the cookie travels by it alone', async () => {
	const secure = await startTestWeb({ ORIGIN: 'https://bowkeeper.example.org' });
	try {
		const one = new Visitor(secure.address, 'https://bowkeeper.example.org');
		const page = await one.get('/sign-in');
		expect(page.headers.get('strict-transport-security')).toMatch(/max-age=\d{8}/);
		const { email, password } = operator.owner;
		const response = await one.post('/sign-in', { email, password });
		expect(response.headers.getSetCookie().join()).toMatch(/; Secure/i);
	} finally {
		await secure.stop();
	}
});

test('the session’s cookie is closed to scripts and other sites, and its pages to shared caches', async () => {
	const one = visitor();
	const { email, password } = operator.owner;
	const response = await one.post('/sign-in', { email, password });
	const [cookie = ''] = response.headers.getSetCookie();
	expect(cookie).toMatch(/^bowkeeper_session=\S+;/);
	expect(cookie).toMatch(/HttpOnly/i);
	expect(cookie).toMatch(/SameSite=Lax/i);
	expect(cookie).not.toMatch(/Secure/i);
	const desk = await one.get(`/desk/${operator.slug}`);
	expect(desk.status).toBe(200);
	expect(desk.headers.get('cache-control')).toBe('private, no-store');
});

test('signing out ends the session itself, and only a form of ours can do it', async () => {
	const one = await signedIn();
	const copy = new Map(one.cookies);
	expect((await one.get('/sign-out')).status).toBe(405);
	expect((await one.post('/sign-out', {}, { origin: 'https://evil.example.org' })).status).toBe(
		403
	);
	expect((await one.get('/me')).status).toBe(200);
	expect((await one.post('/sign-out', {})).status).toBe(303);
	expect(one.cookies.size).toBe(0);
	for (const [name, value] of copy) one.cookies.set(name, value);
	expect((await one.get('/me')).headers.get('location')).toMatch(/^\/sign-in/);
});

test.each([
	['another site', 'https://evil.example.org'],
	['nowhere', undefined],
	['an unnamed place', 'null']
])('a form that comes from %s is refused', async (_, origin) => {
	const one = await signedIn();
	const response = await one.post('/operators', { operatorName: 'Stolen' }, { origin });
	expect(response.status).toBe(403);
	expect(await adminQuery(`select 1 from operator where name = 'Stolen'`)).toEqual([]);
});

test('what another site sends with a session is refused whatever form it has', async () => {
	const one = await signedIn();
	const send = (type: string) =>
		one.get('/operators', {
			method: 'POST',
			body: '{}',
			headers: { origin: 'https://evil.example.org', 'content-type': type }
		});
	for (const type of ['application/json', 'text/plain', 'multipart/form-data; boundary=x']) {
		expect((await send(type)).status, type).toBe(403);
	}
});

test('a body that is too large, or does not say how large it is, is not read', async () => {
	const large = { email: 'a'.repeat(300_000), password: 'x' };
	expect((await visitor().post('/sign-in', large)).status).toBe(413);
	const unsaid = await fetch(`${web.address}/sign-in`, {
		method: 'POST',
		headers: { origin: web.address, 'content-type': 'application/x-www-form-urlencoded' },
		body: new Blob(['email=x']).stream(),
		// Without it a stream can not be sent; the types do not know it yet.
		...{ duplex: 'half' }
	});
	expect(unsaid.status).toBe(411);
});

test('an operator of others is answered like one that does not exist', async () => {
	const other = await makeOperator('Somebody else');
	const one = await signedIn();
	const answers = await Promise.all(
		[other.slug, 'no-such-operator'].map(async (slug) => {
			const response = await one.get(`/desk/${slug}/members`);
			const html = await response.text();
			return { status: response.status, said: html.replaceAll(slug, '').includes('Somebody else') };
		})
	);
	expect(answers).toEqual([
		{ status: 404, said: false },
		{ status: 404, said: false }
	]);
	const stranger = await visitor().get(`/desk/${operator.slug}`);
	expect(stranger.headers.get('location')).toBe(
		`/sign-in?back=${encodeURIComponent(`/desk/${operator.slug}`)}`
	);
});

test('a suspended operator is closed to its members with a reason that helps', async () => {
	const closed = await makeOperator('Closed Terrace');
	await adminQuery(`update operator set status = 'suspended' where id = $1`, [closed.operatorId]);
	const one = visitor();
	await one.post('/sign-in', { email: closed.owner.email, password: closed.owner.password });
	const response = await one.get(`/desk/${closed.slug}`);
	expect(response.status).toBe(403);
	expect(await response.text()).toContain('Closed Terrace is suspended');
});

test('an operator that wants a second step of all lets nobody in without one', async () => {
	const strict = await makeOperator('Strict Terrace');
	await adminQuery('update operator set require_second_step = true where id = $1', [
		strict.operatorId
	]);
	const one = visitor();
	await one.post('/sign-in', { email: strict.owner.email, password: strict.owner.password });
	for (const page of ['', '/members', '/trail', '/settings']) {
		const response = await one.get(`/desk/${strict.slug}${page}`);
		expect(response.headers.get('location'), page).toBe(`/me/second-step?for=${strict.slug}`);
	}
});

test('the way back after signing in never leads to another site', async () => {
	const { email, password } = operator.owner;
	for (const back of [
		'//evil.example.org',
		'/\\evil.example.org',
		'https://evil.example.org',
		''
	]) {
		const response = await visitor().post(`/sign-in?back=${encodeURIComponent(back)}`, {
			email,
			password
		});
		expect(response.headers.get('location'), back).toBe('/operators');
	}
	const response = await visitor().post('/sign-in?back=%2Fme%3Fa%3D1', { email, password });
	expect(response.headers.get('location')).toBe('/me?a=1');
});

test('the platform’s pages do not exist for anybody else', async () => {
	const one = await signedIn();
	for (const page of ['', '/queue', '/health']) {
		expect((await one.get(`/platform${page}`)).status, page).toBe(404);
	}
	expect((await one.post('/platform?/open', { operatorName: 'X' })).status).toBe(404);
});
