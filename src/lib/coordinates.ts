/** The two axes of WGS 84 coordinates, each with the letters of its positive and negative side. */
const axes = {
	latitude: { most: 90, positive: 'N', negative: 'S' },
	longitude: { most: 180, positive: 'E', negative: 'W' }
} as const;

export type Axis = keyof typeof axes;

/**
 * Reads a latitude or longitude as people write it: decimal degrees with point or comma (`45.9312`,
 * `-6,87`), or degrees, minutes and seconds (`45° 55' 52.3" N`, `45 55.87 N`, `W 6°52'28"`).
 * @returns degrees, north and east positive; null when it can not be read or is out of range
 */
export function parseCoordinate(text: string, axis: Axis): number | null {
	const { most, positive, negative } = axes[axis];
	let rest = text.trim().toUpperCase().replaceAll('−', '-');
	let sign = 1;
	const letter = /^([NSEW])|([NSEW])$/.exec(rest);
	if (letter) {
		const side = letter[1] ?? letter[2];
		if (side !== positive && side !== negative) return null;
		if (rest.includes('-')) return null;
		sign = side === negative ? -1 : 1;
		rest = rest.replace(/^[NSEW]|[NSEW]$/, '').trim();
	}
	const match =
		/^([+-]?)(\d{1,3}(?:[.,]\d+)?)\s*°?(?:\s*(\d{1,2}(?:[.,]\d+)?)\s*['′’]?(?:\s*(\d{1,2}(?:[.,]\d+)?)\s*(?:["″”]|'')?)?)?$/.exec(
			rest
		);
	if (!match) return null;
	const number = (part: string | undefined) => Number((part ?? '0').replace(',', '.'));
	const [degrees, minutes, seconds] = [number(match[2]), number(match[3]), number(match[4])];
	const isWhole = (part: string | undefined) => !/[.,]/.test(part ?? '');
	// Only the last part given may have decimals, and minutes and seconds stay below 60.
	if (match[3] !== undefined && !isWhole(match[2])) return null;
	if (match[4] !== undefined && !isWhole(match[3])) return null;
	if (minutes >= 60 || seconds >= 60) return null;
	const value = degrees + minutes / 60 + seconds / 3600;
	if (value > most) return null;
	const signed = sign * (match[1] === '-' ? -1 : 1) * value;
	return signed === 0 ? 0 : signed;
}

/**
 * Parts a pair as it is copied from elsewhere: `45.9312, 6.8745` or `45°55'52"N 6°52'28"E`.
 * @returns latitude and longitude in degrees; null when it is no pair
 */
export function parseCoordinatePair(text: string): { latitude: number; longitude: number } | null {
	const tries = [
		/^(.+[NS])[\s,;]+(.+[EW])$/i,
		/^([^;]+);([^;]+)$/,
		/^([^,]+),\s+([^,]+)$/,
		/^([^,]+),([^,]+)$/,
		/^(\S+)\s+(\S+)$/
	];
	for (const pattern of tries) {
		const match = pattern.exec(text.trim());
		if (!match) continue;
		const latitude = parseCoordinate(match[1]!, 'latitude');
		const longitude = parseCoordinate(match[2]!, 'longitude');
		if (latitude !== null && longitude !== null) return { latitude, longitude };
	}
	return null;
}
