import { spawn } from 'node:child_process';
import type { Guard } from './guard.ts';
import { LogFile } from './log-file.ts';
import { inProject, projectRoot, typescriptArgs } from './paths.ts';
import type { Environment } from '../services/environment.ts';

export interface ToolRun {
	/** File in the checkout. */
	script: string;
	env: Environment;
	logsDir: string;
	guard: Guard;
	timeoutMs?: number;
}

/**
 * Runs one of the project's command line tools to its end.
 * @throws Error with the last lines it wrote when it fails.
 */
export async function runTool(run: ToolRun): Promise<void> {
	const name = run.script.replace(/^.*\/|\.ts$/g, '');
	const log = new LogFile(run.logsDir, name);
	const child = spawn(process.execPath, [...typescriptArgs(), inProject(run.script)], {
		cwd: projectRoot,
		env: run.env,
		detached: true,
		stdio: ['ignore', 'pipe', 'pipe']
	});
	if (child.pid) run.guard.add({ pid: child.pid, signal: 'SIGTERM' });
	child.stdout.on('data', (chunk: Buffer) => log.write(chunk.toString()));
	child.stderr.on('data', (chunk: Buffer) => log.write(chunk.toString()));
	const timer = setTimeout(() => child.kill('SIGKILL'), run.timeoutMs ?? 300_000);
	const how = await new Promise<string | undefined>((resolve) => {
		child.once('error', (error) => resolve(error.message));
		child.once('close', (code, signal) =>
			resolve(code === 0 ? undefined : (signal ?? `exit code ${code}`))
		);
	});
	clearTimeout(timer);
	if (child.pid) run.guard.remove(child.pid);
	log.close();
	if (how) throw new Error(`${run.script} failed (${how}). The end of ${log.path}:\n${log.tail()}`);
}
