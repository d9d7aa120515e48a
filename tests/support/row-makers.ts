import { v7 as uuidv7 } from 'uuid';
import type { Maker } from './rows.ts';

/**
 * What the rows of a table need beyond their types and foreign keys: values that a check or a trigger
 * demands. A table that asks for nothing of the kind needs no maker.
 */
export const makers: Record<string, Maker> = {
	operator: ({ operatorId, word }) => ({ id: operatorId, slug: word(), name: 'Made by a test' }),
	user: ({ word }) => ({ id: uuidv7(), email: `${word()}@example.org` }),
	// A slot lies inside its window.
	slot: async ({ row }) => {
		const window = await row('bow_window');
		return { starts_at: window.starts_at, ends_at: window.ends_at };
	},
	ledger_entry: () => ({ amount_minor: 100, fee_minor: 3, net_minor: 97 }),
	// A document takes its number from a series of its own kind.
	document: async ({ row }) => {
		const series = await row('document_series');
		return {
			series_id: series.id,
			kind: series.kind,
			net_minor: 100,
			tax_minor: 7,
			gross_minor: 107
		};
	}
};
