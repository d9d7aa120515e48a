import { spawn } from 'node:child_process';
import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { freshBuild } from '../lib/build.ts';
import { countPlaywright, countVitest, testFiles, type Count } from '../lib/count.ts';
import { endWith } from '../lib/ending.ts';
import { Guard } from '../lib/guard.ts';
import { inProject, projectRoot } from '../lib/paths.ts';
import { sendSignal } from '../lib/processes.ts';

interface Step {
	name: string;
	/** Arguments for Node.js or, with `npm`, for `npm run`. */
	command: string[];
	/** Where the test files are, and how to count a report; absent: the step itself counts as one. */
	tests?: { folder: string; suffix: string; count: (report: unknown) => Count };
	/** Needs a fresh build first. */
	built?: boolean;
}

const vitest = (project: string): Step => ({
	name: project,
	command: [
		inProject('node_modules/vitest/vitest.mjs'),
		...['run', '--project', project, '--reporter=default', '--reporter=json']
	],
	tests: { folder: `tests/${project}`, suffix: '.test.ts', count: countVitest }
});

const STEPS: Step[] = [
	{ name: 'lint', command: ['npm', 'lint'] },
	{ name: 'types', command: ['npm', 'check'] },
	vitest('unit'),
	vitest('integration'),
	{
		name: 'browser',
		command: [
			inProject('node_modules/@playwright/test/cli.js'),
			...['test', '--reporter=list,json']
		],
		tests: { folder: 'tests/browser', suffix: '.test.ts', count: countPlaywright },
		built: true
	}
];

/**
 * `npm test`: lint, types, unit, integration and browser, each to its end whatever came before. The
 * last line says how many passed and failed.
 * @param only names of steps to run alone; empty: all.
 * @returns the exit code.
 */
export async function test(only: string[]): Promise<number> {
	const unknown = only.filter((name) => !STEPS.some((step) => step.name === name));
	if (unknown.length > 0) {
		console.error(
			`No such step: ${unknown.join(', ')}. There are ${STEPS.map((s) => s.name).join(', ')}.`
		);
		return 2;
	}
	const reports = mkdtempSync(path.join(os.tmpdir(), 'bowkeeper-reports-'));
	const guard = new Guard();
	guard.addFolder(reports);
	const ending = endWith();
	const total: Count = { passed: 0, failed: 0 };
	const lines: string[] = [];
	try {
		for (const step of STEPS) {
			if (ending.asked) break;
			if (only.length > 0 && !only.includes(step.name)) continue;
			const began = Date.now();
			const count = await runStep(step, reports, guard, ending.whenAsked);
			if (!count) continue;
			total.passed += count.passed;
			total.failed += count.failed;
			const seconds = ((Date.now() - began) / 1000).toFixed(0);
			lines.push(
				`  ${step.name.padEnd(12)} ${count.passed} passed, ${count.failed} failed` +
					` (${seconds} s)${count.why ? `: ${count.why}` : ''}`
			);
		}
	} finally {
		rmSync(reports, { recursive: true, force: true });
		await guard.close();
	}
	if (ending.asked) {
		total.failed += 1;
		lines.push('  stopped before the end');
	}
	console.log(`\n${lines.join('\n')}\n`);
	console.log(`${total.passed} passed, ${total.failed} failed`);
	return total.failed === 0 ? 0 : 1;
}

async function runStep(
	step: Step,
	reports: string,
	guard: Guard,
	stopped: Promise<void>
): Promise<Count | undefined> {
	const { tests } = step;
	// No test files: nothing to run, and nothing to count.
	if (tests && testFiles(inProject(tests.folder), tests.suffix) === 0) return undefined;
	console.log(`\n=== ${step.name}`);
	const report = path.join(reports, `${step.name}.json`);
	let code: number;
	try {
		if (step.built) await freshBuild((line) => console.log(`- ${line}`));
		code = await runProcess(step, report, guard, stopped);
	} catch (error) {
		return { passed: 0, failed: 1, why: String(error) };
	}
	if (!tests) return code === 0 ? { passed: 1, failed: 0 } : { passed: 0, failed: 1 };
	if (!existsSync(report)) return { passed: 0, failed: 1, why: 'it ended without a report' };
	const count = tests.count(JSON.parse(readFileSync(report, 'utf8')));
	if (count.passed + count.failed === 0) return { passed: 0, failed: 1, why: 'no test was run' };
	if (code !== 0 && count.failed === 0) {
		return { ...count, failed: 1, why: `exit code ${code} although no test failed` };
	}
	return count;
}

function runProcess(
	step: Step,
	report: string,
	guard: Guard,
	stopped: Promise<void>
): Promise<number> {
	const [first = '', ...rest] = step.command;
	const [command, args] =
		first === 'npm' ? ['npm', ['run', '--silent', ...rest]] : [process.execPath, step.command];
	const vitestFile = step.tests?.count === countVitest ? [`--outputFile.json=${report}`] : [];
	const child = spawn(command, [...args, ...vitestFile], {
		cwd: projectRoot,
		stdio: ['ignore', 'inherit', 'inherit'],
		detached: true,
		env: { ...process.env, PLAYWRIGHT_JSON_OUTPUT_FILE: report }
	});
	const { pid } = child;
	if (pid) guard.add({ pid, signal: 'SIGTERM' });
	void stopped.then(() => {
		if (!pid) return;
		sendSignal(-pid, 'SIGTERM');
		setTimeout(() => sendSignal(-pid, 'SIGKILL'), 20_000).unref();
	});
	return new Promise((resolve, reject) => {
		child.once('error', reject);
		child.once('exit', (code) => {
			if (pid) {
				sendSignal(-pid, 'SIGKILL');
				guard.remove(pid);
			}
			resolve(code ?? 1);
		});
	});
}
