import { eq } from 'drizzle-orm';
import { beforeAll, beforeEach, expect, test } from 'vitest';
import { cancelByBoxOffice } from '../../../src/lib/server/booking/orders.ts';
import { document, documentSeries } from '../../../src/lib/server/db/schema/index.ts';
import { issueReceipt, readDocument } from '../../../src/lib/server/invoicing/documents.ts';
import { documentPdf } from '../../../src/lib/server/invoicing/pdf.ts';
import { sendLetter } from '../../../src/lib/server/mail/send.ts';
import { caughtFor, lettersTo } from '../../support/letters.ts';
import { newAddress } from '../../support/people.ts';
import { emptyQueue } from '../../support/queue.ts';
import { buy, openShop, readOrderRow, type Shop } from '../../support/shop.ts';
import { until } from '../../support/until.ts';

let shop: Shop;
beforeAll(async () => {
	shop = await openShop({ capacity: 100 });
});
beforeEach(emptyQueue);

const documents = () =>
	shop.asOwner((tx) =>
		tx.sql.query.document.findMany({
			where: eq(document.operatorId, shop.operatorId),
			orderBy: document.sequence
		})
	);

test('numbers of a series have no gap and no repeat, though some are given up halfway', async () => {
	const orderId = await buy(shop, shop.slots[0]!.id);
	const sold = await readOrderRow(shop, orderId);
	class Abandoned extends Error {}
	const issue = (abandon: boolean) =>
		shop.asOwner(async (tx) => {
			await issueReceipt(tx, sold, new Date());
			if (abandon) throw new Abandoned();
		});
	const done = await Promise.allSettled(Array.from({ length: 30 }, (_, i) => issue(i % 3 === 0)));
	expect(done.filter(({ status }) => status === 'fulfilled')).toHaveLength(20);
	const all = await documents();
	expect(all.map(({ sequence }) => sequence)).toEqual(all.map((_, i) => i + 1));
	expect(new Set(all.map(({ number }) => number)).size).toBe(21);
	expect(all[0]!.number).toMatch(/^R\d{4}-00001$/);
});

test('an issued document never changes, and no number can be skipped', async () => {
	const [one] = await documents();
	const tries = [
		() =>
			shop.asOwner((tx) =>
				tx.sql.update(document).set({ grossMinor: 1, netMinor: 1, taxMinor: 0 })
			),
		() => shop.asOwner((tx) => tx.sql.delete(document)),
		() =>
			shop.asOwner((tx) =>
				tx.sql
					.update(documentSeries)
					.set({ lastSequence: 500 })
					.where(eq(documentSeries.id, one!.seriesId))
			),
		() =>
			shop.asOwner((tx) =>
				tx.sql
					.update(documentSeries)
					.set({ lastSequence: 22 })
					.where(eq(documentSeries.id, one!.seriesId))
			)
	];
	for (const attempt of tries) await expect(attempt()).rejects.toThrow();
	expect((await documents())[0]).toEqual(one);
});

test('credit notes in two parts add up to the receipt, tax and all', async () => {
	const orderId = await buy(shop, shop.slots[1]!.id, { adults: 3, children: 5 });
	await shop.asOwner((tx) =>
		cancelByBoxOffice(tx, { orderId, inFull: true, words: '' }, new Date())
	);
	const own = (await documents()).filter((one) => one.orderId === orderId);
	const receipt = own.find(({ kind }) => kind === 'receipt')!;
	const credit = own.find(({ kind }) => kind === 'credit_note')!;
	expect(receipt.grossMinor).toBe(3 * 1600 + 5 * 650);
	expect(credit).toMatchObject({
		originalId: receipt.id,
		grossMinor: receipt.grossMinor,
		netMinor: receipt.netMinor,
		taxMinor: receipt.taxMinor,
		taxes: receipt.taxes
	});
	// 48.00 at 10 %: 43.64 and 4.36; 32.50 at 20 %: 27.08 and 5.42.
	expect(receipt.taxes).toEqual([
		{ category: 'S', percent: '20', taxableMinor: 2708, taxMinor: 542 },
		{ category: 'S', percent: '10', taxableMinor: 4364, taxMinor: 436 }
	]);
});

test('the ticket letter carries a QR for each place, the receipt and the calendar entry', async () => {
	const email = newAddress();
	await buy(shop, shop.slots[2]!.id, { adults: 2, email });
	const [letter] = await lettersTo(email);
	await sendLetter({ letterId: letter!.id, operatorId: shop.operatorId }, { number: 1, of: 25 });
	const api = process.env.TEST_MAIL_API!;
	const [caught] = await until('the letter', async () => {
		const found = await caughtFor(email, api);
		return found.length > 0 ? found : null;
	});
	const { attachments } = caught as unknown as {
		attachments: { fileName: string; contentType: string; generatedFileName: string }[];
	};
	const types = attachments.map(({ contentType }) => contentType.split(';')[0]).sort();
	expect(types).toEqual(['application/pdf', 'image/png', 'image/png', 'text/calendar']);
	const pdf = attachments.find(({ contentType }) => contentType === 'application/pdf')!;
	const file = await fetch(`${api}/email/${caught!.id}/attachment/${pdf.generatedFileName}`);
	expect(
		Buffer.from(await file.arrayBuffer())
			.subarray(0, 5)
			.toString()
	).toBe('%PDF-');
	const calendar = attachments.find(({ contentType }) => contentType.startsWith('text/calendar'))!;
	const text = await (
		await fetch(`${api}/email/${caught!.id}/attachment/${calendar.generatedFileName}`)
	).text();
	const utc = (at: Date) => at.toISOString().replaceAll(/[-:]|\.\d{3}/g, '');
	expect(text).toContain(`DTSTART:${utc(shop.slots[2]!.startsAt)}`);
	expect(text).toContain(`DTEND:${utc(shop.slots[2]!.endsAt)}`);
});

test('a document is the same page at any time', async () => {
	const [one] = await documents();
	const read = await shop.asOwner((tx) => readDocument(tx, one!.id));
	expect(await documentPdf(read!)).toEqual(await documentPdf(read!));
});
