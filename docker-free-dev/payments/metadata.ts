import type Stripe from 'stripe';

/** Metadata after an update: texts are set, empty ones taken away; an empty parameter takes all. */
export function mergeMetadata(
	before: Stripe.Metadata | null,
	change: Stripe.Emptyable<Stripe.MetadataParam> | undefined
): Stripe.Metadata {
	if (change === undefined) return before ?? {};
	if (change === '' || change === null) return {};
	const merged: Stripe.Metadata = { ...before };
	for (const [key, value] of Object.entries(change)) {
		if (value === '' || value === null) delete merged[key];
		else merged[key] = String(value);
	}
	return merged;
}
