import { eq } from 'drizzle-orm';
import { createTransport, type Transporter } from 'nodemailer';
import { letter } from '../db/schema';
import { inPublic, inTenant, type PlainTx, type TenantTx } from '../db/transaction';
import { env } from '../env';
import { drawUp } from './enclosures';
import type { Attempt, TaskPayloads } from '../jobs/tasks';

let transport: Transporter | undefined;

function mailer(): Transporter {
	transport ??= createTransport({
		url: env().SMTP_URL,
		connectionTimeout: 10_000,
		greetingTimeout: 10_000,
		socketTimeout: 30_000
	});
	return transport;
}

const origin = { actor: { kind: 'worker', name: 'post room' } } as const;

function inLetterScope<T>(
	operatorId: string | null,
	run: (tx: TenantTx | PlainTx) => Promise<T>
): Promise<T> {
	return operatorId === null ? inPublic(origin, run) : inTenant(operatorId, origin, run);
}

/**
 * Sends one letter. A letter that was sent is left alone; a crash between sending and noting it sends
 * it again under the same Message-ID. When the last try fails the letter is marked as given up.
 * @throws when the mail server does not take it, so that the queue tries again later
 */
export async function sendLetter(
	{ letterId, operatorId }: TaskPayloads['send_letter'],
	attempt: Attempt
): Promise<void> {
	const { found, attachments } = await inLetterScope(operatorId, async (tx) => {
		const found = await tx.sql.query.letter.findFirst({ where: eq(letter.id, letterId) });
		const enclosures = found?.status === 'sent' ? [] : (found?.enclosures ?? []);
		return { found, attachments: tx.operatorId === null ? [] : await drawUp(tx, enclosures) };
	});
	if (!found || found.status === 'sent') return;
	try {
		await mailer().sendMail({
			from: env().MAIL_FROM,
			to: found.toAddress,
			subject: found.subject,
			text: found.bodyText,
			html: found.bodyHtml,
			attachments,
			messageId: found.messageId,
			headers: { 'Auto-Submitted': 'auto-generated' }
		});
	} catch (error) {
		const last = attempt.number >= attempt.of;
		await inLetterScope(operatorId, (tx) =>
			tx.sql
				.update(letter)
				.set({
					attempts: attempt.number,
					lastError: mailFault(error),
					status: last ? 'given_up' : 'waiting'
				})
				.where(eq(letter.id, letterId))
		);
		throw new Error(mailFault(error), { cause: error });
	}
	await inLetterScope(operatorId, (tx) =>
		tx.sql
			.update(letter)
			.set({
				attempts: attempt.number,
				lastError: null,
				status: 'sent',
				sentAt: new Date(),
				...(found.wipeWhenSent ? { bodyText: '', bodyHtml: '' } : {})
			})
			.where(eq(letter.id, letterId))
	);
}

/** What went wrong, without the address that an SMTP answer may repeat. */
function mailFault(error: unknown): string {
	if (!(error instanceof Error)) return 'unknown fault';
	const { code, responseCode } = error as { code?: string; responseCode?: number };
	return ['mail server', code, responseCode].filter((part) => part !== undefined).join(' ');
}
