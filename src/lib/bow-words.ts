/** Compass words for a direction, degrees clockwise from north. */
const winds = [
	'north',
	'north-east',
	'east',
	'south-east',
	'south',
	'south-west',
	'west',
	'north-west'
] as const;

/** The wind of eight that is nearest to a direction. */
export function compassWord(azimuthDeg: number): string {
	return winds[Math.round((((azimuthDeg % 360) + 360) % 360) / 45) % 8]!;
}

/** How much of the ring an arc is, in words that need no protractor. */
export function arcWords(arcDeg: number): string {
	if (arcDeg >= 170) return 'half a circle of bow or more';
	if (arcDeg >= 110) return 'about a third of a circle of bow';
	if (arcDeg >= 80) return 'about a quarter of a circle of bow';
	if (arcDeg >= 55) return 'about a sixth of a circle of bow';
	return 'a short piece of bow';
}

/** What a visitor sees in a slot, and where to look. */
export function viewWords({
	arcDeg,
	lookAzimuthDeg
}: {
	arcDeg: number;
	lookAzimuthDeg: number;
}): string {
	const words = arcWords(arcDeg);
	return `${words[0]!.toUpperCase()}${words.slice(1)}. Stand with the sun behind you and look ${compassWord(lookAzimuthDeg)}.`;
}
