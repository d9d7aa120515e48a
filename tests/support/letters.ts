import { adminQuery } from './database.ts';

export interface StoredLetter {
	id: string;
	operatorId: string | null;
	kind: string;
	subject: string;
	text: string;
	html: string;
	messageId: string;
	status: string;
	attempts: number;
	lastError: string | null;
}

/** The letters in the outbox to an address, oldest first, whether or not they were sent. */
export function lettersTo(address: string): Promise<StoredLetter[]> {
	return adminQuery<StoredLetter>(
		`select id, operator_id as "operatorId", kind, subject, body_text as text, body_html as html,
			message_id as "messageId", status, attempts, last_error as "lastError"
		from letter where to_address = $1 order by id`,
		[address]
	);
}

/** The token at the end of the last link that was written to an address. */
export async function lastLinkTo(address: string): Promise<string> {
	const letter = (await lettersTo(address)).at(-1);
	const token = letter && /^https?:\/\/\S+\/(\S+)$/m.exec(letter.text)?.[1];
	if (!token) throw new Error(`No letter with a link was written to ${address}.`);
	return token;
}

/** A letter as the mail catcher shows it. */
export interface CaughtLetter {
	id: string;
	subject: string;
	text: string;
	html: string;
	messageId: string;
	from: { address: string; name: string }[];
	to: { address: string; name: string }[];
	headers: Record<string, string>;
}

/** What the mail catcher at `api` received for an address. */
export async function caughtFor(address: string, api: string): Promise<CaughtLetter[]> {
	const response = await fetch(`${api}/email`);
	const all = (await response.json()) as CaughtLetter[];
	return all.filter((letter) => letter.to.some((to) => to.address === address));
}
