import { inDesk, orError } from '$lib/server/http';
import { listDocuments } from '$lib/server/invoicing/documents';
import { sellingObstacles } from '$lib/server/payments/accounts';
import { ledgerSums, listLedger } from '$lib/server/payments/money';
import { failedRefunds } from '$lib/server/payments/refunds';
import { isUuid } from '$lib/ids';
import type { PageServerLoad } from './$types';

const pageRows = 50;

export const load: PageServerLoad = (event) =>
	orError(
		inDesk(event, async (tx) => {
			const before = event.url.searchParams.get('before') ?? '';
			const after = isUuid(before) ? { before } : {};
			return {
				sums: await ledgerSums(tx),
				ledger: await listLedger(tx, { most: 25 }),
				documents: await listDocuments(tx, { most: pageRows, ...after }),
				failed: await failedRefunds(tx),
				obstacles: await sellingObstacles(tx),
				pageRows
			};
		})
	);
