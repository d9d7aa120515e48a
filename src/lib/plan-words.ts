const kinds: Record<string, string> = { curtains: 'Curtain', walls: 'Wall', zones: 'Zone' };
const fields: Record<string, string> = {
	name: 'name',
	from: 'from',
	to: 'to',
	bottom: 'bottom',
	top: 'top',
	dropDiameter: 'drops',
	waterTemperature: 'water',
	waterFlow: 'flow',
	outline: 'corners',
	floor: 'floor',
	eyeHeights: 'eye heights',
	minimumArc: 'least arc',
	minimumShare: 'least share',
	minimumSunAltitude: 'least altitude of the sun'
};

/**
 * A plan's JSON path as people call the place: `curtains[1].from[0]` is `Curtain 2, from x`. A path that
 * has no such name stays as it is.
 */
export function pathWords(path: string): string {
	if (path === 'skyline') return 'Skyline';
	const read = /^(?:(curtains|walls|zones)\[(\d+)\]|rule)(?:\.(\w+)((?:\[\d+\])*))?$/.exec(path);
	if (!read) return path;
	const [, kind, index, field, places = ''] = read;
	const part = kind ? `${kinds[kind]} ${Number(index) + 1}` : 'Rule';
	if (!field) return part;
	if (!fields[field]) return path;
	const numbers = [...places.matchAll(/\d+/g)].map(([text]) => Number(text));
	const axis = numbers.length > 0 ? ['x', 'y'][numbers.at(-1)!] : undefined;
	if (field === 'outline' && numbers.length > 0) {
		return `${part}, corner ${numbers[0]! + 1}${numbers.length > 1 && axis ? ` ${axis}` : ''}`;
	}
	if (field === 'eyeHeights' && numbers.length > 0) return `${part}, eye height ${numbers[0]! + 1}`;
	return `${part}, ${fields[field]}${axis ? ` ${axis}` : ''}`;
}
