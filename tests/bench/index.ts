import { parseArgs } from 'node:util';
import type { Section } from './measure';
import { framesSection } from './sections/frames';
import { placeSearchSection } from './sections/place-search';
import { planTableSection } from './sections/plan-table';
import { windowsSection } from './sections/windows';

/**
 * The bench: ratios measured within one run, medians over several rounds, warm.
 *
 *     npm run --silent bench                          every section, as a table
 *     npm run --silent bench -- --only windows --json one section, as [{ "name", "value", "unit" }]
 */
const sections: readonly Section[] = [
	windowsSection,
	planTableSection,
	placeSearchSection,
	framesSection
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
	for (const section of asked) measures.push(...(await section.run()));
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
