import { describe, expect, test } from 'vitest';
import { parseCoordinate, parseCoordinatePair } from '$lib/coordinates';

describe('a coordinate', () => {
	test.each([
		['45.9312', 45.9312],
		['45,9312', 45.9312],
		['-33.5', -33.5],
		['−33.5', -33.5],
		['33.5 S', -33.5],
		['N45.5', 45.5],
		['45° 55\' 52.32" N', 45.9312],
		['45 55 52.32 N', 45.9312],
		['45°55.872′', 45.9312],
		['S 33°30′', -33.5],
		['0', 0],
		['-0', 0],
		['90', 90]
	])('%s is read as a latitude', (text, degrees) => {
		expect(parseCoordinate(text, 'latitude')).toBeCloseTo(degrees, 10);
	});

	test.each([
		'',
		'91',
		'90 0 1',
		'north',
		'45 E',
		'45 60',
		'45 10 60',
		'45.5 30',
		'45 10.5 20',
		'-45 S',
		'1e2',
		'4 5 6 7'
	])('%s is no latitude', (text) => expect(parseCoordinate(text, 'latitude')).toBeNull());

	test('a longitude goes to 180, with letters of its own', () => {
		expect(parseCoordinate('179 59 59 W', 'longitude')).toBeCloseTo(-179.999722, 6);
		expect(parseCoordinate('181', 'longitude')).toBeNull();
		expect(parseCoordinate('6 N', 'longitude')).toBeNull();
	});
});

describe('a pair', () => {
	test.each([
		'45.9312, 6.8745',
		'45.9312,6.8745',
		'45.9312 6.8745',
		'45,9312; 6,8745',
		'45,9312 6,8745',
		'45° 55\' 52.32" N, 6° 52\' 28.2" E',
		'45 55 52.32 N 6 52 28.2 E'
	])('%s', (text) => {
		const pair = parseCoordinatePair(text);
		expect(pair?.latitude).toBeCloseTo(45.9312, 10);
		expect(pair?.longitude).toBeCloseTo(6.8745, 10);
	});
	test.each(['45.9312', 'x, y', '91, 6', ''])('%s is none', (text) =>
		expect(parseCoordinatePair(text)).toBeNull()
	);
});
