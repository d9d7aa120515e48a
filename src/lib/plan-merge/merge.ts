import { sameJson } from '../canonical';
import type { Plan, PlanCurtain, PlanWall, PlanZone } from '../schemas/plan';
import { matchParts } from './match';

type Kind = 'curtains' | 'walls' | 'zones';
type Part = PlanCurtain | PlanWall | PlanZone;

/** Something that both changed, and not alike. The merged plan has mine. */
export interface Clash {
	/** JSON path in the merged plan: of a part, of a field of it, or `skyline`. */
	path: string;
	/** What it is about: the part's name and the field, `North curtain, ends`. */
	what: string;
	/** `changed`: both changed it. `theirs gone`, `mine gone`: one removed what the other changed. */
	kind: 'changed' | 'theirs gone' | 'mine gone';
	/** What they have there, to be set by whoever takes theirs. Absent when they removed it. */
	theirs?: Record<string, unknown>;
}

/** A plan with the changes of both, and where these do not agree. */
export interface Merge {
	plan: Plan;
	clashes: Clash[];
	/** How many things of theirs came in: changed fields, new and removed parts. */
	taken: number;
}

/** Fields that only make sense together are merged as one: half a curtain moved is nobody's curtain. */
const fieldGroups: Record<Kind, readonly (readonly [string, ...string[]])[]> = {
	curtains: [
		['name'],
		['from', 'to'],
		['bottom', 'top'],
		['dropDiameter'],
		['waterTemperature'],
		['waterFlow'],
		['enabled']
	],
	walls: [['name'], ['from', 'to'], ['bottom', 'top']],
	zones: [['name'], ['outline'], ['floor'], ['eyeHeights']]
};

const groupWords: Record<string, string> = {
	name: 'name',
	from: 'ends',
	bottom: 'heights',
	dropDiameter: 'drops',
	waterTemperature: 'water',
	waterFlow: 'flow',
	enabled: 'switched on',
	outline: 'corners',
	floor: 'floor',
	eyeHeights: 'eye heights',
	minimumArc: 'least arc',
	minimumShare: 'least share',
	minimumSunAltitude: 'least altitude of the sun'
};
const kindWords: Record<Kind, string> = { curtains: 'Curtain', walls: 'Wall', zones: 'Zone' };

type Loose = Record<string, unknown>;
const pick = (from: object, keys: readonly string[]): Loose =>
	Object.fromEntries(keys.map((key) => [key, (from as Loose)[key]]));

/** What is absent is no key without a value. */
const withoutAbsent = (part: Loose): Loose =>
	Object.fromEntries(Object.entries(part).filter(([, value]) => value !== undefined));

/** Merges one thing's groups of fields; calls back for each that both changed. */
function mergeFields(
	groups: readonly (readonly [string, ...string[]])[],
	{ base, mine, theirs }: { base: object; mine: object; theirs: object },
	onclash: (group: readonly [string, ...string[]], theirs: Loose) => void
): { merged: Loose; taken: number } {
	let merged: Loose = { ...(mine as Loose) };
	let taken = 0;
	for (const group of groups) {
		const [was, own, other] = [base, mine, theirs].map((one) => pick(one, group)) as [
			Loose,
			Loose,
			Loose
		];
		if (sameJson(other, was) || sameJson(other, own)) continue;
		if (sameJson(own, was)) {
			merged = { ...merged, ...other };
			taken++;
		} else onclash(group, other);
	}
	return { merged: withoutAbsent(merged), taken };
}

function mergeList(
	kind: Kind,
	{ base, mine, theirs }: { base: Part[]; mine: Part[]; theirs: Part[] },
	clashes: Clash[]
): { merged: Part[]; taken: number } {
	const toMine = matchParts(base, mine);
	const toTheirs = matchParts(base, theirs);
	const merged: Part[] = [];
	let taken = 0;
	const add = (part: Part): string => `${kind}[${merged.push(part) - 1}]`;
	const nameOf = (part: Part) => part.name?.trim() || `${kindWords[kind]} ${merged.length}`;

	base.forEach((was, i) => {
		const own = mine[toMine[i] ?? -1];
		const other = theirs[toTheirs[i] ?? -1];
		if (own && other) {
			const path = `${kind}[${merged.length}]`;
			const found: Clash[] = [];
			const fields = mergeFields(
				fieldGroups[kind],
				{ base: was, mine: own, theirs: other },
				(group, values) =>
					found.push({
						path: `${path}.${group[0]}`,
						what: group[0],
						kind: 'changed',
						theirs: values
					})
			);
			taken += fields.taken;
			add(fields.merged as unknown as Part);
			const name = nameOf(fields.merged as unknown as Part);
			clashes.push(
				...found.map((clash) => ({ ...clash, what: `${name}, ${groupWords[clash.what]}` }))
			);
		} else if (own) {
			if (sameJson(own, was)) {
				taken++;
				return;
			}
			const path = add(own);
			clashes.push({ path, what: nameOf(own), kind: 'theirs gone' });
		} else if (other && !sameJson(other, was)) {
			// Nothing of theirs is lost in silence: it is back, and said to be.
			const path = add(other);
			clashes.push({ path, what: nameOf(other), kind: 'mine gone', theirs: { ...other } });
		}
	});
	const isNew = (matches: (number | null)[]) => (_: Part, j: number) => !matches.includes(j);
	const ownNew = mine.filter(isNew(toMine));
	ownNew.forEach(add);
	for (const part of theirs.filter(isNew(toTheirs))) {
		// Both drew the same: it is one part.
		if (ownNew.some((own) => sameJson(own, part))) continue;
		add(part);
		taken++;
	}
	return { merged, taken };
}

/**
 * Brings together what two people made of one plan. What only one of them changed is taken; where both
 * changed the same, mine stays and the clash is named. The order of parts is the base's, then mine, then
 * theirs. The place of the site is mine: it is not the plan's to change.
 *
 * @param base what both began from
 * @returns a plan that has still to be checked: two right plans can make a wrong one
 */
export function mergePlans({
	base,
	mine,
	theirs
}: {
	base: Plan;
	mine: Plan;
	theirs: Plan;
}): Merge {
	const clashes: Clash[] = [];
	let taken = 0;
	const list = (kind: Kind) => {
		const of = (plan: Plan): Part[] => plan[kind] ?? [];
		const done = mergeList(kind, { base: of(base), mine: of(mine), theirs: of(theirs) }, clashes);
		taken += done.taken;
		return done.merged;
	};
	const curtains = list('curtains') as PlanCurtain[];
	const walls = list('walls') as PlanWall[];
	const zones = list('zones') as PlanZone[];
	const rule = mergeFields(
		[['minimumArc'], ['minimumShare'], ['minimumSunAltitude']],
		{ base: base.rule, mine: mine.rule, theirs: theirs.rule },
		([key], values) =>
			clashes.push({
				path: `rule.${key}`,
				what: `When the bow counts, ${groupWords[key]}`,
				kind: 'changed',
				theirs: values
			})
	);
	taken += rule.taken;
	const skyline = mergeFields([['skyline']], { base, mine, theirs }, (_, values) =>
		clashes.push({ path: 'skyline', what: 'Skyline', kind: 'changed', theirs: values })
	);
	taken += skyline.taken;
	return {
		plan: {
			...mine,
			skyline: skyline.merged['skyline'] as Plan['skyline'],
			curtains,
			walls,
			zones,
			rule: rule.merged as Plan['rule']
		},
		clashes,
		taken
	};
}

/**
 * The plan with their side of a thing that both changed.
 * @throws RangeError when the clash is about a removed part, or its part is not there (any more)
 */
export function withTheirs(plan: Plan, { kind: clashKind, path, theirs }: Clash): Plan {
	if (clashKind !== 'changed') throw new RangeError('a removed part has no side to take');
	if (path === 'skyline') return { ...plan, ...theirs } as Plan;
	const at = /^(curtains|walls|zones)\[(\d+)\]/.exec(path);
	if (!at) return { ...plan, rule: { ...plan.rule, ...theirs } };
	const [kind, index] = [at[1] as Kind, Number(at[2])];
	const parts: Part[] = plan[kind] ?? [];
	if (!parts[index]) throw new RangeError(`the plan has no ${path}`);
	const next = withoutAbsent({ ...(parts[index] as unknown as Loose), ...theirs });
	return {
		...plan,
		[kind]: parts.map((part, i) => (i === index ? (next as unknown as Part) : part))
	};
}

/** A clash in a sentence, for who merges. */
export function clashWords({ kind, what }: Clash): string {
	if (kind === 'theirs gone') return `${what}: they removed it, you changed it. It stays.`;
	if (kind === 'mine gone') return `${what}: you removed it, they changed it. It is back.`;
	return `${what}: both changed it. Yours stays.`;
}
