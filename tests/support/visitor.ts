/** A visitor without a browser: keeps cookies, follows nothing, sends forms as a plain page does. */
export class Visitor {
	readonly cookies = new Map<string, string>();
	readonly #base: string;
	readonly #origin: string;

	/** @param origin what the pages say their address is, when it is not where they are reached */
	constructor(base: string, origin = base) {
		this.#base = base;
		this.#origin = origin;
	}

	get(path: string, init: RequestInit = {}): Promise<Response> {
		return this.#send(path, init);
	}

	/** Sends a form from a page of our own, unless `headers` say otherwise. */
	post(
		path: string,
		fields: Record<string, string>,
		headers: Record<string, string | undefined> = {}
	): Promise<Response> {
		return this.#send(path, {
			method: 'POST',
			body: new URLSearchParams(fields),
			headers: present({ origin: this.#origin, ...headers })
		});
	}

	async #send(path: string, init: RequestInit): Promise<Response> {
		const headers = new Headers(init.headers);
		if (!headers.has('accept')) headers.set('accept', 'text/html');
		if (this.cookies.size > 0) {
			headers.set(
				'cookie',
				[...this.cookies].map(([name, value]) => `${name}=${value}`).join('; ')
			);
		}
		const response = await fetch(this.#base + path, { ...init, headers, redirect: 'manual' });
		for (const line of response.headers.getSetCookie()) {
			const [, name = '', value = '', rest = ''] = /^([^=]+)=([^;]*)(.*)$/.exec(line) ?? [];
			if (/max-age=0/i.test(rest)) this.cookies.delete(name);
			else this.cookies.set(name, value);
		}
		return response;
	}
}

function present(headers: Record<string, string | undefined>): Record<string, string> {
	return Object.fromEntries(
		Object.entries(headers).flatMap(([name, value]) => (value === undefined ? [] : [[name, value]]))
	);
}
