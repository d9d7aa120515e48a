import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { createSite, findWindows, stateAt } from '../../../src/lib/optics';
import { quarryTerrace } from '../../support/plans';

const root = fileURLToPath(new URL('../../..', import.meta.url));
let folder = '';
const planFile = () => join(folder, 'plan.json');

beforeAll(() => {
	folder = mkdtempSync(join(tmpdir(), 'bow-windows-'));
	writeFileSync(planFile(), JSON.stringify(quarryTerrace()));
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

function run(...flags: string[]) {
	const { status, stdout, stderr } = spawnSync(
		process.execPath,
		[join(root, 'node_modules/tsx/dist/cli.mjs'), join(root, 'src/bin/windows.ts'), ...flags],
		{ encoding: 'utf8', cwd: root }
	);
	return { status, stdout, lines: stderr.split('\n').filter((line) => line !== '') };
}

function planWith(change: (plan: ReturnType<typeof quarryTerrace>) => void): string {
	const plan = quarryTerrace();
	change(plan);
	const file = join(folder, 'changed.json');
	writeFileSync(file, JSON.stringify(plan));
	return file;
}

describe('windows on the command line', () => {
	it('prints the windows of a range', () => {
		const { status, stdout, lines } = run(planFile(), '--from', '2027-03-01', '--to', '2027-03-02');
		expect({ status, lines }).toEqual({ status: 0, lines: [] });
		const site = createSite(quarryTerrace());
		const text = (ms: number) => new Date(ms).toISOString().replace('.000', '');
		expect(JSON.parse(stdout)).toEqual({
			plan: 'Quarry terrace',
			zones: findWindows({ site, from: '2027-03-01', to: '2027-03-02' }).map(
				({ zone, windows }) => ({
					zone,
					windows: windows.map((w) => ({
						date: w.date,
						start: text(w.startMs),
						end: text(w.endMs),
						peakShare: w.peakShare,
						peakArc: w.peakArcDeg
					}))
				})
			)
		});
	});

	it('prints the state at an instant', () => {
		const { status, stdout } = run(planFile(), '--at', '2027-03-01T08:30:00Z');
		expect(status).toBe(0);
		const state = stateAt(createSite(quarryTerrace()), Date.UTC(2027, 2, 1, 8, 30));
		const printed = JSON.parse(stdout);
		expect(Object.keys(printed)).toEqual(['sun', 'zones', 'curtains']);
		expect(printed.sun).toEqual({ azimuth: state.sun.azimuthDeg, altitude: state.sun.altitudeDeg });
		expect(printed.zones[0].eyes.length).toBe(state.zones[0]!.eyes.length);
		expect(printed.zones[0].eyes[5].arc).toBe(state.zones[0]!.eyes[5]!.arcDeg);
		expect(printed.zones[0].open).toBe(true);
		expect(printed.curtains.map((c: { curtain: string }) => c.curtain)).toEqual([
			'West curtain',
			'North curtain'
		]);
	});

	it('names every fault of a plan, one a line, and prints nothing', () => {
		const file = planWith((plan) => {
			plan.latitude = 91;
			plan.curtains[1]!.top = 0;
			plan.zones[0]!.outline = [
				[0, 0],
				[4, 4],
				[4, 0],
				[0, 5]
			];
		});
		const { status, stdout, lines } = run(file, '--from', '2027-03-02', '--to', '2027-03-01');
		expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
		expect(lines.map((line) => line.split(':')[0])).toEqual([
			'latitude',
			'curtains[1].top',
			'zones[0].outline',
			'--to'
		]);
	});

	it.each<[string, string[], string[]]>([
		['no flags', [], ['--from', '--to']],
		['one date', ['--from', '2027-03-01'], ['--to']],
		['no such days', ['--from', '2027-02-30', '--to', 'soon'], ['--from', '--to']],
		['too many days', ['--from', '2027-01-01', '--to', '2030-01-06'], ['--to']],
		['an instant that is none', ['--at', 'noon'], ['--at']],
		['an instant and a range', ['--at', '2027-03-01T08:30:00Z', '--from', '2027-03-01'], ['--at']],
		['an unknown flag', ['--until', '2027-03-01'], ['flags']]
	])('exits 2 for %s', (_name, flags, paths) => {
		const { status, stdout, lines } = run(planFile(), ...flags);
		expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
		expect(lines.map((line) => line.split(':')[0])).toEqual(paths);
	});

	it('reads a file that begins with a byte order mark', () => {
		const file = join(folder, 'marked.json');
		writeFileSync(file, `\uFEFF${JSON.stringify(quarryTerrace())}`);
		expect(run(file, '--at', '2027-03-01T08:30:00Z').status).toBe(0);
	});

	it('exits 2 for a file that is missing or not JSON, and for none', () => {
		const dates = ['--from', '2027-03-01', '--to', '2027-03-01'];
		const broken = join(folder, 'broken.json');
		writeFileSync(broken, '{ "name": ');
		for (const flags of [[join(folder, 'absent.json'), ...dates], [broken, ...dates], dates]) {
			const { status, stdout, lines } = run(...flags);
			expect({ status, stdout, count: lines.length }).toEqual({ status: 2, stdout: '', count: 1 });
			expect(lines[0]).toMatch(/^plan: /);
		}
	});
});
