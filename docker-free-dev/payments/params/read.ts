import { ApiError, invalid, missingParameter } from '../errors.ts';
import { isCurrency } from '../money.ts';
import type { FormTree } from '../form.ts';
import type { Field, Fields } from './fields.ts';

type Node = FormTree | string;

/**
 * Reads parameters by their table: numbers and flags become such, unknown names are refused as the
 * service refuses them.
 * @throws ApiError for the first fault.
 */
export function readParams(tree: FormTree, fields: Fields): unknown {
	return readObject(tree, fields, '');
}

function readObject(tree: FormTree, fields: Fields, at: string): Record<string, unknown> {
	const name = (key: string) => (at ? `${at}[${key}]` : key);
	const unknown = Object.keys(tree).filter((key) => !Object.hasOwn(fields, key));
	if (unknown.length > 0) {
		const names = unknown.map(name);
		throw invalid(`Received unknown parameter${names.length > 1 ? 's' : ''}: ${names.join(', ')}`, {
			param: names[0],
			code: 'parameter_unknown'
		});
	}
	const read: Record<string, unknown> = {};
	for (const [key, field] of Object.entries(fields)) {
		const node = tree[key];
		if (node === undefined) {
			if (field.required) throw missingParameter(name(key));
			continue;
		}
		read[key] = readNode(node, field, name(key));
	}
	return read;
}

function readNode(node: Node, field: Field, at: string): unknown {
	switch (field.kind) {
		case 'notPlayed':
			throw invalid(`The payment double knows the parameter ${at} and does not play it.`, {
				param: at,
				code: 'parameter_not_played'
			});
		case 'object':
			if (typeof node === 'string') throw invalid('Invalid object', { param: at });
			return readObject(node, field.fields, at);
		case 'integerOrObject':
			if (typeof node === 'string') return readInteger(node, 0, at);
			return readObject(node, field.fields, at);
		case 'list':
			return readList(node, field.of, field.max ?? 100, at);
		case 'metadata':
			return readMetadata(node, at);
		default:
			if (typeof node !== 'string') throw invalid('Invalid string', { param: at });
			if (node === '') throw emptyText(at);
			return readLeaf(node, field, at);
	}
}

function readLeaf(value: string, field: Field, at: string): unknown {
	switch (field.kind) {
		case 'integer':
			return readInteger(value, field.min ?? 0, at);
		case 'flag':
			if (value !== 'true' && value !== 'false') {
				throw invalid(`Invalid boolean: ${value}`, { param: at });
			}
			return value === 'true';
		case 'choice':
			if (!field.of.includes(value)) {
				throw invalid(`Invalid ${at}: must be one of ${inWords(field.of)}`, { param: at });
			}
			return value;
		case 'email':
			if (!/^[^\s@]+@[^\s@]+\.[^\s@]+$/.test(value)) {
				throw invalid(`Invalid email address: ${value}`, { param: at, code: 'email_invalid' });
			}
			return value;
		case 'url':
			if (!isWebAddress(value)) {
				throw invalid('Not a valid URL', { param: at, code: 'url_invalid' });
			}
			return value;
		case 'currency':
			if (!isCurrency(value.toLowerCase())) {
				throw invalid(`Invalid currency: ${value.toLowerCase()}.`, { param: at });
			}
			return value.toLowerCase();
		case 'text':
			if (value.length > (field.max ?? 5_000)) {
				throw invalid(
					`Invalid string: ${value.slice(0, 10)}...; must be at most ${field.max} characters`,
					{ param: at }
				);
			}
			return value;
		default:
			return value;
	}
}

function readInteger(value: string, min: number, at: string): number {
	const fault = (message: string) =>
		invalid(message, { param: at, code: 'parameter_invalid_integer' });
	if (!/^-?\d{1,15}$/.test(value)) throw fault(`Invalid integer: ${value}`);
	const number = Number(value);
	if (number < min) {
		throw fault(
			min === 0
				? 'Invalid non-negative integer'
				: `This value must be greater than or equal to ${min}.`
		);
	}
	return number;
}

function readList(node: Node, of: Field, max: number, at: string): unknown[] {
	if (typeof node === 'string') throw invalid('Invalid array', { param: at });
	const keys = Object.keys(node);
	if (!keys.every((key) => /^\d+$/.test(key))) throw invalid('Invalid array', { param: at });
	if (keys.length > max) throw invalid(`Array must have at most ${max} elements`, { param: at });
	return keys
		.map(Number)
		.sort((a, b) => a - b)
		.map((key) => readNode(node[String(key)] ?? '', of, `${at}[${key}]`));
}

/** Metadata as given: text by key; an empty text takes the key away, an empty parameter all of them. */
function readMetadata(node: Node, at: string): Record<string, string> | '' {
	if (node === '') return '';
	if (typeof node === 'string') throw invalid('Invalid object', { param: at });
	const read: Record<string, string> = {};
	for (const [key, value] of Object.entries(node)) {
		if (typeof value !== 'string') throw invalid('Invalid string', { param: `${at}[${key}]` });
		if (key.length > 40) {
			throw invalid(`Metadata keys can have up to 40 characters, but '${key}' has ${key.length}.`, {
				param: at
			});
		}
		if (value.length > 500) {
			throw invalid(
				`Metadata values can have up to 500 characters, but you passed in a value that is ` +
					`${value.length} characters. Invalid value: ${value.slice(0, 20)}...`,
				{ param: `${at}[${key}]` }
			);
		}
		read[key] = value;
	}
	if (Object.keys(read).length > 50) {
		throw invalid('You cannot set more than 50 metadata keys on an object.', { param: at });
	}
	return read;
}

function emptyText(at: string): ApiError {
	return invalid(
		`You passed an empty string for '${at}'. We assume empty values are an attempt to unset a ` +
			`parameter; however '${at}' cannot be unset. You should remove '${at}' from your request or ` +
			`supply a non-empty value.`,
		{ param: at, code: 'parameter_invalid_empty' }
	);
}

function isWebAddress(value: string): boolean {
	try {
		return ['http:', 'https:'].includes(new URL(value).protocol);
	} catch {
		return false;
	}
}

function inWords(values: readonly string[]): string {
	if (values.length < 2) return values.join('');
	return `${values.slice(0, -1).join(', ')} or ${values.at(-1)}`;
}
