import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { projectRoot } from './paths.ts';
import type { Stack } from '../stack.ts';

interface SignIn {
	role: string;
	email: string;
	password: string;
	note?: string;
}

/** The one table that a start prints: addresses, demo sign-ins, logs. */
export function summary(stack: Stack): string {
	const rows: [string, string][] = [
		['Bowkeeper', stack.origin],
		['Letters', stack.mail.address],
		['Payment double', stack.payments.address],
		['Forecast double', stack.forecast.address],
		['Database', stack.database.address],
		['Logs', path.relative(projectRoot, stack.logsDir) || stack.logsDir]
	];
	const table = layOut(rows);
	const signIns = readSignIns(stack.demoFile);
	if (signIns.length === 0) return `\n${table}\n`;
	const people = layOut([
		['Sign in as', 'e-mail', 'password', ''],
		...signIns.map((one) => [one.role, one.email, one.password, one.note ?? ''])
	]);
	return `\n${table}\n\n${people}\n`;
}

function readSignIns(file: string): SignIn[] {
	if (!existsSync(file)) return [];
	return JSON.parse(readFileSync(file, 'utf8')) as SignIn[];
}

function layOut(rows: string[][]): string {
	const widths: number[] = [];
	for (const row of rows) {
		row.forEach((cell, column) => {
			widths[column] = Math.max(widths[column] ?? 0, cell.length);
		});
	}
	return rows
		.map((row) => ('  ' + row.map((cell, i) => cell.padEnd(widths[i] ?? 0)).join('   ')).trimEnd())
		.join('\n');
}
