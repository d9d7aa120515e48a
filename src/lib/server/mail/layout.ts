/** What a letter says; one content, written out as plain text and as HTML. */
export interface LetterContent {
	subject: string;
	greeting: string;
	paragraphs: string[];
	/** Tickets: the picture that goes with the letter, what it is, and its code in writing. */
	codes?: { contentId: string; label: string; code: string }[];
	action?: { label: string; url: string };
	/** Said under the action in small type, for example how long a link holds. */
	note?: string;
	/** Who writes: the operator's name or the product's. */
	from: string;
}

function escapeHtml(value: string): string {
	return value
		.replaceAll('&', '&amp;')
		.replaceAll('<', '&lt;')
		.replaceAll('>', '&gt;')
		.replaceAll('"', '&quot;');
}

/** The letter as plain text. */
export function letterText(content: LetterContent): string {
	const parts = [content.greeting, ...content.paragraphs];
	if (content.codes) {
		parts.push(content.codes.map(({ label, code }) => `${label}: ${code}`).join('\n'));
	}
	if (content.action) parts.push(`${content.action.label}:\n${content.action.url}`);
	if (content.note) parts.push(content.note);
	parts.push(content.from);
	return parts.join('\n\n') + '\n';
}

/** The letter as HTML: one column, no pictures, readable without its styles. */
export function letterHtml(content: LetterContent): string {
	const paragraph = (text: string, style = '') =>
		`<p style="margin:0 0 16px;${style}">${escapeHtml(text).replaceAll('\n', '<br>')}</p>`;
	const codes = (content.codes ?? [])
		.map(
			({ contentId, label, code }) =>
				`<div style="margin:0 0 16px;padding:12px;border:1px solid #D3DEDB;border-radius:28px 6px 6px 6px;text-align:center"><img src="cid:${escapeHtml(contentId)}" alt="QR code of ${escapeHtml(code)}" width="200" height="200" style="display:block;margin:0 auto 8px"><strong>${escapeHtml(label)}</strong><br><span style="font:15px monospace">${escapeHtml(code)}</span></div>`
		)
		.join('');
	const action = content.action
		? `<p style="margin:24px 0"><a href="${escapeHtml(content.action.url)}" style="background:#0E5A66;color:#FFFFFF;border-radius:6px;padding:12px 18px;font-weight:bold;text-decoration:none;display:inline-block">${escapeHtml(content.action.label)}</a></p>${paragraph(content.action.url, 'font-size:13px;color:#4A5D64;word-break:break-all;')}`
		: '';
	return `<!doctype html><html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width"><title>${escapeHtml(content.subject)}</title></head><body style="margin:0;background:#F1F5F3;padding:24px"><div style="max-width:560px;margin:0 auto;background:#FFFFFF;border:1px solid #D3DEDB;border-radius:28px 6px 6px 6px;padding:28px;font:16px/1.5 Nunito,Verdana,sans-serif;color:#14232A">${paragraph(content.greeting)}${content.paragraphs.map((text) => paragraph(text)).join('')}${codes}${action}${content.note ? paragraph(content.note, 'font-size:13px;color:#4A5D64;') : ''}${paragraph(content.from, 'margin-top:24px;color:#4A5D64;')}</div></body></html>`;
}
