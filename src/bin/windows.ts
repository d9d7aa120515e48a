import { readFileSync } from 'node:fs';
import { parseArgs } from 'node:util';
import { createSite, findWindows, stateAt, type Site } from '../lib/optics';
import { localDayRange, parseInstant } from '../lib/schedule';
import { readPlan } from '../lib/schemas/plan';

/**
 * Bow windows on the command line:
 *
 *     npm run --silent windows -- PLAN.json --from 2027-03-01 --to 2027-03-31
 *     npm run --silent windows -- PLAN.json --at 2027-03-01T08:30:00Z
 *
 * Prints JSON on standard output. Anything wrong: nothing there, one line a fault on standard error,
 * each beginning with the JSON path or the flag at fault, and exit status 2.
 */

type Question = { at: number } | { from: string; to: string };

/** An instant as RFC 3339 UTC to the second, or to the millisecond where it has any. */
function instantText(instantMs: number): string {
	return new Date(instantMs).toISOString().replace('.000Z', 'Z');
}

/** The reason why a call throws, or null when it does not. */
function faultOf(call: () => void): string | null {
	try {
		call();
		return null;
	} catch (error) {
		return error instanceof Error ? error.message : String(error);
	}
}

/** Reads the plan file; faults go to the list. */
function readSite(file: string, faults: string[]): Site | null {
	let text: string;
	try {
		text = readFileSync(file, 'utf8');
	} catch (error) {
		const reason = error instanceof Error && 'code' in error ? String(error.code) : 'unknown';
		faults.push(`plan: can not be read from ${file} (${reason})`);
		return null;
	}
	let input: unknown;
	try {
		// Some editors begin a file with a byte order mark, which is no part of the JSON (RFC 8259, 8.1).
		input = JSON.parse(text.replace(/^\uFEFF/, ''));
	} catch (error) {
		const reason = error instanceof Error ? error.message.replace(/\s+/g, ' ') : 'unknown';
		faults.push(`plan: is not JSON (${reason})`);
		return null;
	}
	const read = readPlan(input);
	if (read.ok) return createSite(read.plan);
	faults.push(...read.faults.map(({ path, message }) => `${path}: ${message}`));
	return null;
}

/** Reads the flags; faults go to the list. */
function readQuestion(
	flags: { from?: string | undefined; to?: string | undefined; at?: string | undefined },
	faults: string[]
): Question | null {
	const { from, to, at } = flags;
	if (at !== undefined) {
		if (from !== undefined || to !== undefined) {
			faults.push('--at: can not be given together with --from or --to');
		}
		let instantMs = NaN;
		const fault = faultOf(() => (instantMs = parseInstant(at)));
		if (fault !== null) faults.push(`--at: ${fault}`);
		return { at: instantMs };
	}
	for (const [name, value] of [
		['--from', from],
		['--to', to]
	] as const) {
		const fault =
			value === undefined
				? 'is missing (or give --at)'
				: faultOf(() => localDayRange({ timeZone: 'UTC', from: value, to: value }));
		if (fault !== null) faults.push(`${name}: ${fault}`);
	}
	if (from === undefined || to === undefined) return null;
	// The order and the length only when each date is one.
	if (!faults.some((line) => line.startsWith('--'))) {
		const fault = faultOf(() => localDayRange({ timeZone: 'UTC', from, to }));
		if (fault !== null) faults.push(`--to: ${fault}`);
	}
	return { from, to };
}

function answer(site: Site, question: Question): unknown {
	if ('at' in question) {
		const { sun, zones, curtains } = stateAt(site, question.at);
		return {
			sun: { azimuth: sun.azimuthDeg, altitude: sun.altitudeDeg },
			zones: zones.map(({ zone, share, open, eyes }) => ({
				zone,
				share,
				open,
				eyes: eyes.map(({ x, y, z, arcDeg }) => ({ x, y, z, arc: arcDeg }))
			})),
			curtains: curtains.map(({ curtain, radiusDeg }) => ({ curtain, radius: radiusDeg }))
		};
	}
	return {
		plan: site.name,
		zones: findWindows({ site, ...question }).map(({ zone, windows }) => ({
			zone,
			windows: windows.map(({ date, startMs, endMs, peakShare, peakArcDeg }) => ({
				date,
				start: instantText(startMs),
				end: instantText(endMs),
				peakShare,
				peakArc: peakArcDeg
			}))
		}))
	};
}

function main(): number {
	const faults: string[] = [];
	let site: Site | null = null;
	let question: Question | null = null;
	const fault = faultOf(() => {
		const { values, positionals } = parseArgs({
			allowPositionals: true,
			options: { from: { type: 'string' }, to: { type: 'string' }, at: { type: 'string' } }
		});
		const [file, ...others] = positionals;
		if (file === undefined) faults.push('plan: no file is named');
		else site = readSite(file, faults);
		for (const other of others) faults.push(`${other}: is not expected`);
		question = readQuestion(values, faults);
	});
	if (fault !== null) faults.push(`flags: ${fault.replace(/\s+/g, ' ')}`);
	if (faults.length > 0 || site === null || question === null) {
		process.stderr.write(faults.map((line) => `${line}\n`).join(''));
		return 2;
	}
	process.stdout.write(`${JSON.stringify(answer(site, question), null, 2)}\n`);
	return 0;
}

process.exitCode = main();
