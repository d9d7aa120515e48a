import { parseArgs } from 'node:util';
import type { Section } from './measure';

/**
 * The bench: ratios measured within one run, medians over several rounds, warm. Only what is asked for is
 * loaded: a browser's driver in memory slows what is measured beside it.
 *
 *     npm run --silent bench                          every section, as a table
 *     npm run --silent bench -- --only windows --json one section, as [{ "name", "value", "unit" }]
 */
const sections: readonly { name: string; load: () => Promise<Section> }[] = [
	{ name: 'windows', load: async () => (await import('./sections/windows')).windowsSection },
	{
		name: 'plan-table',
		load: async () => (await import('./sections/plan-table')).planTableSection
	},
	{
		name: 'place-search',
		load: async () => (await import('./sections/place-search')).placeSearchSection
	},
	{ name: 'frames', load: async () => (await import('./sections/frames')).framesSection }
];

async function main(): Promise<number> {
	const { values } = parseArgs({
		options: { only: { type: 'string' }, json: { type: 'boolean', default: false } }
	});
	const asked = sections.filter(({ name }) => values.only === undefined || name === values.only);
	if (asked.length === 0) {
		const names = sections.map(({ name }) => name).join(', ');
		process.stderr.write(`--only: must be one of ${names}, not ${values.only}\n`);
		return 2;
	}
	const measures = [];
	for (const { load } of asked) measures.push(...(await (await load()).run()));
	if (values.json) {
		process.stdout.write(`${JSON.stringify(measures, null, 2)}\n`);
		return 0;
	}
	const width = Math.max(...measures.map(({ name }) => name.length));
	for (const { name, value, unit } of measures) {
		process.stdout.write(`${name.padEnd(width)}  ${Number(value.toPrecision(4))} ${unit}\n`);
	}
	return 0;
}

process.exitCode = await main();
