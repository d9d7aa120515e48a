import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import net from 'node:net';

/** Everything listens here and nowhere else. */
export const LOOPBACK = '127.0.0.1';

/** The usual port of each service; the next free one is taken when something else holds it. */
export const USUAL_PORTS = {
	web: 3000,
	database: 54329,
	smtp: 1025,
	mail: 1080,
	payments: 4010,
	forecast: 4020
};

export type PortName = keyof typeof USUAL_PORTS;
export type Ports = Record<PortName, number>;

/** Whether a server can listen on this loopback port now. */
export function portIsFree(port: number): Promise<boolean> {
	return new Promise((resolve) => {
		const server = net.createServer();
		server.once('error', () => resolve(false));
		server.listen({ port, host: LOOPBACK, exclusive: true }, () =>
			server.close(() => resolve(true))
		);
	});
}

/** A port that the system says is free. */
export function anyFreePort(): Promise<number> {
	return new Promise((resolve, reject) => {
		const server = net.createServer();
		server.once('error', reject);
		server.listen(0, LOOPBACK, () => {
			const address = server.address();
			const port = typeof address === 'object' && address ? address.port : 0;
			server.close(() => resolve(port));
		});
	});
}

/** Free ports for a throw-away stack. */
export async function freePorts(): Promise<Ports> {
	const taken = new Set<number>();
	const entries: [string, number][] = [];
	for (const name of Object.keys(USUAL_PORTS)) {
		let port = await anyFreePort();
		while (taken.has(port)) port = await anyFreePort();
		taken.add(port);
		entries.push([name, port]);
	}
	return Object.fromEntries(entries) as Ports;
}

/**
 * The ports of this checkout: those of the last run when they are free (so that a bookmark stays
 * right), else the usual ones, else the next free ones. Remembered in `file`.
 */
export async function steadyPorts(file: string): Promise<Ports> {
	const remembered = readRemembered(file);
	const taken = new Set<number>();
	const chosen: Ports = { ...USUAL_PORTS };
	for (const name of Object.keys(USUAL_PORTS) as PortName[]) {
		const wanted = [remembered[name], USUAL_PORTS[name]].filter((port) => port !== undefined);
		chosen[name] = await firstFree(wanted, taken);
		taken.add(chosen[name]);
	}
	writeFileSync(file, JSON.stringify(chosen, null, '\t') + '\n');
	return chosen;
}

async function firstFree(wanted: number[], taken: Set<number>): Promise<number> {
	for (const port of wanted) if (!taken.has(port) && (await portIsFree(port))) return port;
	const last = wanted.at(-1) ?? 20_000;
	for (let port = last + 1; port < last + 200; port++) {
		if (!taken.has(port) && (await portIsFree(port))) return port;
	}
	return anyFreePort();
}

function readRemembered(file: string): Partial<Ports> {
	if (!existsSync(file)) return {};
	try {
		return JSON.parse(readFileSync(file, 'utf8')) as Partial<Ports>;
	} catch {
		return {};
	}
}
