import { readPlan, type Plan, type PlanFault } from './plan';

/**
 * A plan as plain tables of text fields. A field's name is the plan's own JSON path, so that a fault's
 * path names its field; lists of numbers (an outline, a skyline) are one field, a line each.
 */

/** Everything that was typed, by field name. */
export type PlanFields = Record<string, string>;

export const sheetFields = [
	'name',
	'from[0]',
	'from[1]',
	'to[0]',
	'to[1]',
	'bottom',
	'top'
] as const;
export const curtainFields = [
	...sheetFields,
	'dropDiameter',
	'waterTemperature',
	'waterFlow'
] as const;
export const zoneFields = ['name', 'outline', 'floor', 'eyeHeights'] as const;

/** Lists of a plan that are tables, with the text fields of a row. */
const tables = { curtains: curtainFields, walls: sheetFields, zones: zoneFields } as const;
type Table = keyof typeof tables;

const mostRows = 200;

/** A number as people type it: comma or point, a typographic minus too. NaN when it is none. */
export function typedNumber(text: string): number {
	const plain = text.trim().replace(',', '.').replace('−', '-');
	return /^[+-]?(\d+\.?\d*|\.\d+)$/.test(plain) ? Number(plain) : NaN;
}

/**
 * Lines of numbers: parted by semicolons, tabs or spaces, with decimal points or commas; or by commas,
 * with decimal points. A byte-order mark, quotation marks and a first line of words are passed over.
 */
export function typedRows(text: string): number[][] {
	const lines = text
		.replace(/^\uFEFF/, '')
		.replaceAll(/["']/g, '')
		.split(/\r\n|\r|\n/)
		.map((line) => line.trim())
		.filter((line) => line !== '');
	if (lines[0] && /\p{L}/u.test(lines[0]) && !/\d/.test(lines[0])) lines.shift();
	return lines.map((line) => {
		const wide = line.split(/[;\t]|\s+/).filter((part) => part !== '');
		// `1,5 2,5` are two numbers; `1.5,2.5` and `1,2` are parted by their comma.
		const parts = wide.length > 1 ? wide.map((part) => part.replace(/,$/, '')) : line.split(',');
		return parts.map(typedNumber);
	});
}

/** Rows of a table that hold anything; their places in the form, in order. */
function filledRows(fields: PlanFields, table: Table): number[] {
	const rows: number[] = [];
	for (let row = 0; row < mostRows; row++) {
		const some = tables[table].some((field) => (fields[`${table}[${row}].${field}`] ?? '').trim());
		if (some) rows.push(row);
	}
	return rows;
}

function sheet(value: (field: string) => number, name: string) {
	return {
		...(name ? { name } : {}),
		from: [value('from[0]'), value('from[1]')],
		to: [value('to[0]'), value('to[1]')],
		bottom: value('bottom'),
		top: value('top')
	};
}

/**
 * Reads the tables. The place and zone come from the site.
 * @returns the plan, or every fault under the name of its field
 */
export function planFromFields(
	fields: PlanFields,
	site: Pick<Plan, 'name' | 'latitude' | 'longitude' | 'elevation' | 'timeZone'>
): { plan: Plan } | { faults: PlanFault[] } {
	const rows = {
		curtains: filledRows(fields, 'curtains'),
		walls: filledRows(fields, 'walls'),
		zones: filledRows(fields, 'zones')
	};
	const at = (table: Table, row: number) => {
		const text = (field: string) => (fields[`${table}[${row}].${field}`] ?? '').trim();
		return { text, value: (field: string) => typedNumber(text(field)) };
	};
	const input = {
		...site,
		skyline: typedRows(fields['skyline'] ?? ''),
		curtains: rows.curtains.map((row) => {
			const { text, value } = at('curtains', row);
			return {
				...sheet(value, text('name')),
				dropDiameter: value('dropDiameter'),
				...(text('waterTemperature') ? { waterTemperature: value('waterTemperature') } : {}),
				...(text('waterFlow') ? { waterFlow: value('waterFlow') } : {}),
				enabled: fields[`curtains[${row}].enabled`] !== undefined
			};
		}),
		walls: rows.walls.map((row) => {
			const { text, value } = at('walls', row);
			return sheet(value, text('name'));
		}),
		zones: rows.zones.map((row) => {
			const { text, value } = at('zones', row);
			return {
				...(text('name') ? { name: text('name') } : {}),
				outline: typedRows(text('outline')),
				floor: value('floor'),
				eyeHeights: text('eyeHeights')
					.split(/[;\s]+|,\s+/)
					.filter((part) => part !== '')
					.map(typedNumber)
			};
		}),
		rule: {
			minimumArc: typedNumber(fields['rule.minimumArc'] ?? ''),
			minimumShare: typedNumber(fields['rule.minimumShare'] ?? ''),
			minimumSunAltitude: typedNumber(fields['rule.minimumSunAltitude'] ?? '')
		}
	};
	const read = readPlan(input);
	if (read.ok) return { plan: read.plan };
	return { faults: faultsOfFields(read.faults, rows) };
}

/** Faults by field. Those of a list that is one field are one: the first, with its place in the list. */
function faultsOfFields(faults: readonly PlanFault[], rows: Record<Table, number[]>): PlanFault[] {
	const lists = new Map<string, { message: string; count: number }>();
	const told: PlanFault[] = [];
	for (const { path, message } of faults) {
		const field = fieldOf(path, rows);
		const place = listFields.exec(path)?.[2];
		if (place === undefined) {
			told.push({ path: field, message });
			continue;
		}
		const known = lists.get(field);
		if (known) known.count++;
		else
			lists.set(field, {
				message: `${placeWord(field)} ${Number(place) + 1} ${message}`,
				count: 1
			});
	}
	for (const [path, { message, count }] of lists) {
		told.push({ path, message: count > 1 ? `${message} (and ${count - 1} more)` : message });
	}
	return told;
}

/** Lists of numbers that are typed in one field, and the place of what is wrong in them. */
const listFields = /^(skyline|zones\[\d+\]\.(?:outline|eyeHeights))(?:\[(\d+)\])?.*$/;

/** What the places of such a list are called. */
const placeWord = (field: string) =>
	field === 'skyline' ? 'line' : field.endsWith('outline') ? 'corner' : 'height';

/** The name of the field that a fault is about, with the row's place in the form. */
function fieldOf(path: string, rows: Record<Table, number[]>): string {
	const placed = path.replace(/^(curtains|walls|zones)\[(\d+)\]/, (_, table: Table, i: string) => {
		return `${table}[${rows[table][Number(i)] ?? i}]`;
	});
	return placed.replace(listFields, '$1');
}

/** A plan as the fields of its tables. */
export function fieldsFromPlan(plan: Plan): PlanFields {
	const fields: PlanFields = {};
	const set = (name: string, value: string | number | undefined) => {
		if (value !== undefined) fields[name] = String(value);
	};
	const setSheet = (
		name: string,
		one: Plan['curtains'][number] | NonNullable<Plan['walls']>[number]
	) => {
		set(`${name}.name`, one.name);
		for (const end of ['from', 'to'] as const) {
			set(`${name}.${end}[0]`, one[end][0]);
			set(`${name}.${end}[1]`, one[end][1]);
		}
		set(`${name}.bottom`, one.bottom);
		set(`${name}.top`, one.top);
	};
	plan.curtains.forEach((curtain, i) => {
		setSheet(`curtains[${i}]`, curtain);
		set(`curtains[${i}].dropDiameter`, curtain.dropDiameter);
		set(`curtains[${i}].waterTemperature`, curtain.waterTemperature);
		set(`curtains[${i}].waterFlow`, curtain.waterFlow);
		if (curtain.enabled ?? true) set(`curtains[${i}].enabled`, 'on');
	});
	(plan.walls ?? []).forEach((wall, i) => setSheet(`walls[${i}]`, wall));
	plan.zones.forEach((zone, i) => {
		set(`zones[${i}].name`, zone.name);
		set(`zones[${i}].outline`, zone.outline.map(([x, y]) => `${x}; ${y}`).join('\n'));
		set(`zones[${i}].floor`, zone.floor);
		set(`zones[${i}].eyeHeights`, zone.eyeHeights.join('; '));
	});
	set('skyline', plan.skyline.map(([azimuth, altitude]) => `${azimuth}; ${altitude}`).join('\n'));
	set('rule.minimumArc', plan.rule.minimumArc);
	set('rule.minimumShare', plan.rule.minimumShare);
	set('rule.minimumSunAltitude', plan.rule.minimumSunAltitude);
	return fields;
}

/** How many rows of a table the fields hold, with the empty ones between. */
export function rowCount(fields: PlanFields, table: Table): number {
	const rows = filledRows(fields, table);
	return (rows.at(-1) ?? -1) + 1;
}
