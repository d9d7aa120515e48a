/** Runs one of the commands. @returns the exit code. */
export async function main(command: string, args: string[]): Promise<number> {
	switch (command) {
		case 'start':
		case 'dev':
			return (await import('./commands/start.ts')).start(command);
		case 'test':
			return (await import('./commands/test.ts')).test(args);
		case 'reset':
			return (await import('./commands/reset.ts')).reset();
		default:
			console.error(`No such command: ${command}. There are start, dev, test and reset.`);
			return 2;
	}
}
