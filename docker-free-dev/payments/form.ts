import { invalid } from './errors.ts';

/** A form's nested parameters: text at the leaves. */
export interface FormTree {
	[key: string]: FormTree | string;
}

/**
 * Reads `a[b][0][c]=text` and `a[]=text` into a tree. Array positions stay keys ("0", "1", ...).
 * @throws ApiError when a name is malformed or is both a value and a group.
 */
export function parseForm(text: string): FormTree {
	const root: FormTree = Object.create(null) as FormTree;
	for (const [name, value] of new URLSearchParams(text)) put(root, pathOf(name), value, name);
	return root;
}

function pathOf(name: string): string[] {
	const match = /^([^[\]]+)((?:\[[^[\]]*\])*)$/.exec(name);
	if (!match) throw invalid(`Invalid parameter name: ${name}`, { param: name });
	const inner = [...(match[2] ?? '').matchAll(/\[([^[\]]*)\]/g)].map((part) => part[1] ?? '');
	return [match[1] ?? '', ...inner];
}

function put(root: FormTree, path: string[], value: string, name: string): void {
	let node = root;
	path.forEach((step, index) => {
		const key = step === '' ? String(Object.keys(node).length) : step;
		const last = index === path.length - 1;
		const there = node[key];
		if (last) {
			if (typeof there === 'object') throw invalid(`Invalid object`, { param: name });
			node[key] = value;
		} else {
			if (typeof there === 'string') throw invalid(`Invalid object`, { param: name });
			const next = there ?? (Object.create(null) as FormTree);
			node[key] = next;
			node = next;
		}
	});
}
