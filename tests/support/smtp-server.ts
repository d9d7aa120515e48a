import net from 'node:net';

/** What the server does with the next letters. */
export type SmtpMood = 'take' | 'refuse' | 'hang';

/**
 * A mail server whose mood a test chooses: it takes letters, refuses each recipient naming the address
 * (as real ones do), or reads a letter and never answers.
 */
export async function startSmtpServer(port = 0) {
	const taken: string[] = [];
	const sockets = new Set<net.Socket>();
	let mood: SmtpMood = 'take';
	let hanging: () => void = () => {};
	let onHang = new Promise<void>((resolve) => (hanging = resolve));
	let answerLate: () => void = () => {};
	const server = net.createServer((socket) => {
		sockets.add(socket);
		socket.on('close', () => sockets.delete(socket));
		socket.on('error', () => {});
		let rest = '';
		let letter: string[] | undefined;
		const say = (line: string) => socket.write(`${line}\r\n`);
		const take = () => {
			taken.push(Buffer.from((letter ?? []).join('\r\n'), 'latin1').toString('utf8'));
			letter = undefined;
			say('250 taken');
		};
		say('220 mail.example.org ready');
		socket.on('data', (chunk: Buffer) => {
			const lines = (rest + chunk.toString('latin1')).split('\r\n');
			rest = lines.pop() ?? '';
			for (const line of lines) {
				if (letter) {
					if (line !== '.') letter.push(line);
					else if (mood === 'hang') {
						answerLate = take;
						hanging();
					} else take();
				} else if (/^(EHLO|HELO)/.test(line)) say('250 mail.example.org');
				else if (line.startsWith('RCPT') && mood === 'refuse') {
					say(`451 4.3.0 ${line.slice('RCPT TO:'.length)} is not taken now`);
				} else if (line === 'DATA') {
					letter = [];
					say('354 go on');
				} else if (line === 'QUIT') {
					say('221 bye');
					socket.end();
				} else say('250 ok');
			}
		});
	});
	await new Promise<void>((resolve, reject) => {
		server.once('error', reject);
		server.listen(port, '127.0.0.1', resolve);
	});
	const address = server.address();
	const actual = typeof address === 'object' && address ? address.port : port;
	return {
		url: `smtp://127.0.0.1:${actual}`,
		/** Sources of the letters taken so far. */
		taken,
		takenFor: (to: string) => taken.filter((source) => source.includes(`To: ${to}`)),
		be: (next: SmtpMood) => {
			mood = next;
			onHang = new Promise<void>((resolve) => (hanging = resolve));
		},
		/** Settles when a letter was read and is left without an answer. */
		get hung() {
			return onHang;
		},
		/** Answers the letter that was left without an answer last. */
		answerLate: () => answerLate(),
		close: () =>
			new Promise<void>((resolve) => {
				for (const socket of sockets) socket.destroy();
				server.close(() => resolve());
			})
	};
}

export type SmtpServer = Awaited<ReturnType<typeof startSmtpServer>>;

/** The value of a header of a letter's source, folded lines joined. */
export function headerOf(source: string, name: string): string | undefined {
	const head = source.slice(0, source.indexOf('\r\n\r\n')).replaceAll(/\r\n[ \t]+/g, ' ');
	const line = head
		.split('\r\n')
		.find((one) => one.toLowerCase().startsWith(`${name.toLowerCase()}:`));
	return line?.slice(name.length + 1).trim();
}
