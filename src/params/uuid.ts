import { isUuid } from '$lib/ids';

/** Ids in addresses: whatever is none is an unknown address. */
export const match = isUuid;
