import { mkdirSync } from 'node:fs';
import type { Guard } from '../lib/guard.ts';
import { LogFile } from '../lib/log-file.ts';
import { inProject, projectRoot } from '../lib/paths.ts';
import { LOOPBACK } from '../lib/ports.ts';
import { supervise, type Service } from '../lib/supervise.ts';
import { answers } from '../lib/wait.ts';
import { baseEnvironment } from './environment.ts';

export interface MaildevOptions {
	smtpPort: number;
	webPort: number;
	/** Where caught letters are kept. */
	mailDir: string;
	logsDir: string;
	guard: Guard;
	notice?: (line: string) => void;
}

/** Starts the mail catcher: takes every letter by SMTP, shows it on a page, sends none on. */
export async function startMaildev(options: MaildevOptions): Promise<Service> {
	const { smtpPort, webPort, mailDir } = options;
	mkdirSync(mailDir, { recursive: true, mode: 0o700 });
	const address = `http://${LOOPBACK}:${webPort}`;
	const running = await supervise({
		name: 'mail',
		command: process.execPath,
		args: [
			inProject('node_modules/maildev/bin/maildev'),
			...['--ip', LOOPBACK, '--smtp', String(smtpPort)],
			...['--web-ip', LOOPBACK, '--web', String(webPort)],
			...['--mail-directory', mailDir]
		],
		env: baseEnvironment(),
		cwd: projectRoot,
		log: new LogFile(options.logsDir, 'mail'),
		guard: options.guard,
		ready: () => answers(`${address}/healthz`),
		notice: options.notice
	});
	return { name: 'mail', address, stop: () => running.stop(), pid: () => running.pid() };
}
