import { canonicalJson } from '../canonical';

/** A part of a plan: it goes by its name, if it has one, and by where it stands. */
interface Placed {
	name?: string | undefined;
	from?: unknown;
	to?: unknown;
	outline?: unknown;
}

/**
 * Which part of a changed list was which part of the base. Parts carry no identity of their own, so they
 * are known, in this order: unchanged; by a name that is the only one of its kind in both lists; by
 * standing where they stood, though renamed; and without a name, by their place in the list.
 * @returns for each part of the base its index in the other list, or null when it is gone
 */
export function matchParts<T extends Placed>(
	base: readonly T[],
	other: readonly T[]
): (number | null)[] {
	const found: (number | null)[] = base.map(() => null);
	const taken = new Set<number>();
	const pair = (i: number, j: number) => {
		found[i] = j;
		taken.add(j);
	};
	const free = (j: number) => !taken.has(j);

	const texts = other.map(canonicalJson);
	base.forEach((part, i) => {
		const text = canonicalJson(part);
		const j =
			texts[i] === text && free(i) ? i : texts.findIndex((one, at) => one === text && free(at));
		if (j >= 0) pair(i, j);
	});
	const only = (list: readonly T[], name: string) =>
		list.filter((part) => part.name === name).length === 1;
	base.forEach((part, i) => {
		const { name } = part;
		if (found[i] !== null || !name || !only(base, name) || !only(other, name)) return;
		const j = other.findIndex((one) => one.name === name);
		if (free(j)) pair(i, j);
	});
	const standing = ({ from, to, outline }: T) => canonicalJson({ from, to, outline });
	base.forEach((part, i) => {
		if (found[i] !== null) return;
		const j = other.findIndex((one, at) => free(at) && standing(one) === standing(part));
		if (j >= 0) pair(i, j);
	});
	base.forEach((part, i) => {
		const there = other[i];
		if (found[i] === null && there && free(i) && !part.name && !there.name) pair(i, i);
	});
	return found;
}
