import { readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { expect, test } from 'vitest';

const ROUTES = path.resolve('src/routes');

/** The forms of the Svelte files that lie beside a page, as they stand in the source. */
function formsBeside(folder: string): string[] {
	return readdirSync(folder)
		.filter((name) => name.endsWith('.svelte'))
		.flatMap((name) => {
			const source = readFileSync(path.join(folder, name), 'utf8');
			return [...source.matchAll(/<form\b[\s\S]*?<\/form>/g)].map(
				([form]) => `${path.relative(ROUTES, path.join(folder, name))}: ${form}`
			);
		});
}

/** What stands between the brackets of each call of a function. */
function callsOf(name: string, source: string): string[] {
	return [...source.matchAll(new RegExp(`\\b${name}\\(`, 'g'))].map((match) => {
		const start = match.index + match[0].length;
		let depth = 1;
		let end = start;
		for (; depth > 0 && end < source.length; end++) {
			if (source[end] === '(') depth++;
			if (source[end] === ')') depth--;
		}
		return source.slice(start, end - 1);
	});
}

const pages = readdirSync(ROUTES, { recursive: true, encoding: 'utf8' })
	.filter((name) => name.endsWith('+page.server.ts'))
	.map((name) => path.join(ROUTES, path.dirname(name)));

test('a page whose forms have names has every form say its own', () => {
	// With script the name is added by itself; without, the answer would find no form to stand above.
	const nameless: string[] = [];
	for (const folder of pages) {
		const server = readFileSync(path.join(folder, '+page.server.ts'), 'utf8');
		if (!callsOf('emptyForm', server).some((call) => /,\s*'[\w-]+'\s*$/.test(call))) continue;
		for (const form of formsBeside(folder)) {
			if (form.includes('use:') && !form.includes('name="__superform_id"')) {
				nameless.push(form.split('\n')[0] ?? '');
			}
		}
	}
	expect(nameless).toEqual([]);
});

test('no page carries a handler that the content policy would refuse', () => {
	const files = readdirSync('src', { recursive: true, encoding: 'utf8' }).filter((name) =>
		/\.(svelte|html)$/.test(name)
	);
	for (const name of files) {
		const source = readFileSync(path.join('src', name), 'utf8');
		expect(source, name).not.toMatch(/\son[a-z]+="|href="javascript:/);
	}
});
