/** How one parameter is read and checked. */
export type Field =
	| { kind: 'text'; max?: number; required?: true }
	| { kind: 'email'; required?: true }
	| { kind: 'url'; required?: true }
	| { kind: 'currency'; required?: true }
	| { kind: 'integer'; min?: number; required?: true }
	| { kind: 'flag'; required?: true }
	| { kind: 'choice'; of: readonly string[]; required?: true }
	| { kind: 'metadata'; required?: true }
	| { kind: 'object'; fields: Fields; required?: true }
	| { kind: 'list'; of: Field; max?: number; required?: true }
	| { kind: 'integerOrObject'; fields: Fields; required?: true }
	/** Known to the service and not played by this double: told apart from an unknown name. */
	| { kind: 'notPlayed'; required?: true };

export type Fields = { [name: string]: Field };

/**
 * A table for the SDK's parameter type `T`: it names each of the type's parameters, so that a parameter
 * that comes with a newer SDK does not compile until it has its line. Names of older versions of the
 * API may be added.
 */
export type FieldsFor<T> = { [K in keyof Required<T>]: Field };

export const text = (max = 5_000): Field => ({ kind: 'text', max });
export const email: Field = { kind: 'email' };
export const url: Field = { kind: 'url' };
export const currency: Field = { kind: 'currency' };
export const integer = (min = 0): Field => ({ kind: 'integer', min });
export const flag: Field = { kind: 'flag' };
export const choice = (...of: string[]): Field => ({ kind: 'choice', of });
export const metadata: Field = { kind: 'metadata' };
export const object = (fields: Fields): Field => ({ kind: 'object', fields });
export const list = (of: Field, max = 100): Field => ({ kind: 'list', of, max });
export const notPlayed: Field = { kind: 'notPlayed' };
export const expand: Field = list(text(500), 20);

/** The same field, but it must be there. */
export function required(field: Field): Field {
	return { ...field, required: true };
}

/** What every list takes. */
export const paging = {
	limit: integer(1),
	starting_after: text(),
	ending_before: text(),
	expand
};

/** A moment in seconds, or bounds for it. */
export const created: Field = {
	kind: 'integerOrObject',
	fields: { gt: integer(), gte: integer(), lt: integer(), lte: integer() }
};
