import { existsSync, readdirSync } from 'node:fs';

/** How many tests passed and failed, and why when that is not plain. */
export interface Count {
	passed: number;
	failed: number;
	why?: string;
}

/** How many test files lie under `folder`. */
export function testFiles(folder: string, suffix: string): number {
	if (!existsSync(folder)) return 0;
	const entries = readdirSync(folder, { recursive: true, encoding: 'utf8' });
	return entries.filter((entry) => entry.endsWith(suffix)).length;
}

interface VitestReport {
	numPassedTests: number;
	numFailedTests: number;
	numFailedTestSuites: number;
	testResults: { status: string; assertionResults: unknown[] }[];
}

/** Counts a report of vitest. A file that failed before its first test counts as one failure. */
export function countVitest(report: unknown): Count {
	const { numPassedTests, numFailedTests, testResults } = report as VitestReport;
	const broken = testResults.filter(
		(file) => file.status === 'failed' && file.assertionResults.length === 0
	).length;
	return { passed: numPassedTests, failed: numFailedTests + broken };
}

interface PlaywrightReport {
	stats: { expected: number; unexpected: number; flaky: number };
	errors: unknown[];
}

/** Counts a report of Playwright. What passed only on a second try counts as failed. */
export function countPlaywright(report: unknown): Count {
	const { stats, errors } = report as PlaywrightReport;
	const failed = stats.unexpected + stats.flaky;
	return { passed: stats.expected, failed: failed === 0 ? errors.length : failed };
}
