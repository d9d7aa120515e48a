import { v7 as uuidv7 } from 'uuid';
import { letter } from '../db/schema';
import type { Enclosure } from '../db/schema/letters';
import type { PlainTx, TenantTx } from '../db/transaction';
import { env } from '../env';
import { addJob } from '../jobs/add';
import { letterHtml, letterText, type LetterContent } from './layout';

export interface NewLetter {
	/** What it is for, for example `invitation`. */
	kind: string;
	to: string;
	content: LetterContent;
	/** The letter holds a link that grants a right: its body is wiped once it is sent. */
	wipeWhenSent?: boolean;
	enclosures?: Enclosure[];
}

/**
 * Puts a letter into the outbox in the transaction that causes it, with the job that sends it. In a
 * tenant transaction the letter is the operator's, else the platform's.
 * @returns the letter's id
 */
export async function writeLetter(tx: TenantTx | PlainTx, mail: NewLetter): Promise<string> {
	const letterId = uuidv7();
	await tx.sql.insert(letter).values({
		id: letterId,
		operatorId: tx.operatorId,
		kind: mail.kind,
		toAddress: mail.to,
		subject: mail.content.subject,
		bodyText: letterText(mail.content),
		bodyHtml: letterHtml(mail.content),
		messageId: `<${letterId}@${new URL(env().ORIGIN).hostname}>`,
		wipeWhenSent: mail.wipeWhenSent ?? false,
		enclosures: mail.enclosures ?? []
	});
	await addJob(tx, 'send_letter', { letterId, operatorId: tx.operatorId }, { key: letterId });
	return letterId;
}
