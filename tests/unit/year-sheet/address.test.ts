import { expect, it } from 'vitest';
import { readAddress, writeAddress } from '../../../src/lib/year-sheet/address';

it('an address comes back as it was written', () => {
	const address = { version: 3, zone: 'Höhe & Hof', day: '2027-03-02', programme: 'typed' };
	expect(readAddress(new URLSearchParams(writeAddress(address)))).toEqual(address);
	const bare = { version: null, zone: null, day: null, programme: null };
	expect(writeAddress(bare)).toBe('');
	expect(readAddress(new URLSearchParams('version=-1&day=2027-02-30'))).toEqual(bare);
});
