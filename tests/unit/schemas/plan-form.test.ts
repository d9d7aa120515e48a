import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { readPlan, type Plan } from '$lib/schemas/plan';
import { fieldsFromPlan, planFromFields, typedNumber, typedRows } from '$lib/schemas/plan-form';

const plan = JSON.parse(readFileSync('tests/fixtures/four-by-four.json', 'utf8')) as Plan;
const { name, latitude, longitude, elevation, timeZone } = plan;
const site = { name, latitude, longitude, elevation, timeZone };

describe('a plan as tables', () => {
	test('comes back as it was', () => {
		const [first, ...others] = plan.curtains;
		const read = readPlan({
			...plan,
			curtains: [{ ...first, waterTemperature: 12, waterFlow: 37.5 }, ...others]
		});
		expect(read.ok && planFromFields(fieldsFromPlan(read.plan), site)).toEqual({
			plan: read.ok && read.plan
		});
	});

	test('rows left empty are none, and a fault names the field where it was typed', () => {
		const fields = fieldsFromPlan(plan);
		const moved: Record<string, string> = {};
		for (const [field, value] of Object.entries(fields)) {
			moved[field.replace(/^curtains\[(\d)\]/, (_, i) => `curtains[${Number(i) + 3}]`)] = value;
		}
		moved['curtains[4].top'] = 'high';
		moved['curtains[5].dropDiameter'] = '4';
		const answer = planFromFields(moved, site);
		expect('faults' in answer && answer.faults).toEqual([
			{ path: 'curtains[4].top', message: 'must be a finite number' },
			{ path: 'curtains[5].dropDiameter', message: 'must be from 5 to 3000' }
		]);
	});

	test('faults in lists of numbers name the one field that they were typed in', () => {
		const fields = {
			...fieldsFromPlan(plan),
			skyline: '0; 6\n60; high\n50; 3',
			'zones[0].outline': '0; 0\n5; 5\n5; 0\n0; 5',
			'zones[0].eyeHeights': '1,2; tall'
		};
		const answer = planFromFields(fields, site);
		// One message at each field, however much is wrong in it.
		expect('faults' in answer && answer.faults).toEqual([
			{ path: 'zones[0].outline', message: 'must not cross or touch itself' },
			{ path: 'skyline', message: 'line 2 must be a finite number' },
			{ path: 'zones[0].eyeHeights', message: 'height 2 must be a finite number' }
		]);
	});
});

describe('numbers as people type them', () => {
	test.each([
		['1,5', 1.5],
		[' 2.25 ', 2.25],
		['−3', -3],
		['+4', 4],
		['.5', 0.5]
	])('%s', (text, value) => expect(typedNumber(text)).toBe(value));
	test.each(['', 'abc', '1.2.3', '1,2,3', '1e3', 'Infinity', 'NaN', '0x10', '١'])(
		'%s is none',
		(text) => expect(typedNumber(text)).toBeNaN()
	);
});

describe('lines of numbers', () => {
	const rows = [
		[0, 6],
		[60, 9.5]
	];
	test.each([
		['semicolons and points', '0; 6\n60; 9.5'],
		['semicolons and decimal commas', '0;6\r\n60;9,5\r\n'],
		['commas', '0,6\n60,9.5'],
		['tabs', '0\t6\n60\t9.5'],
		['spaces and decimal commas', '0 6\n60 9,5'],
		['a byte-order mark and a heading', '\uFEFFazimuth;altitude\n0;6\n60;9,5'],
		['a heading parted by commas', 'azimuth,altitude\n0,6\n60,9.5'],
		['quotation marks', '"azimuth","altitude"\r\n"0","6"\r\n"60","9.5"'],
		['empty lines and old line ends', '0, 6\r\r60, 9.5']
	])('with %s', (_, text) => expect(typedRows(text)).toEqual(rows));

	test.each([
		['a hundred thousand', 100_000, (i: number) => `${i};1`, 'must have at most 3600'],
		[
			'three thousand the wrong way round',
			3000,
			(i: number) => `${359 - i / 10};1`,
			'line 2 must be above the azimuth before it, 359 (and 2998 more)'
		],
		[
			'three thousand without altitudes',
			3000,
			(i: number) => `${i}`,
			'line 1 must be [azimuth, altitude] in degrees (and 2999 more)'
		]
	])('%s are refused in one message at the field', (_, count, line, message) => {
		const text = Array.from({ length: count }, (__, i) => line(i)).join('\n');
		const answer = planFromFields({ ...fieldsFromPlan(plan), skyline: text }, site);
		expect('faults' in answer && answer.faults).toEqual([{ path: 'skyline', message }]);
	});
});
