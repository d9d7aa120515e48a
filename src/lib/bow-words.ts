import { vividWords } from './bow-strip';

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
	if (arcDeg >= 170) return 'Half a circle or more';
	if (arcDeg >= 110) return 'About a third of a circle';
	if (arcDeg >= 80) return 'About a quarter of a circle';
	if (arcDeg >= 55) return 'About a sixth of a circle';
	return 'A short piece';
}

/** What a visitor sees in a slot, and where to look. */
export function viewWords({
	arcDeg,
	lookAzimuthDeg,
	vividness
}: {
	arcDeg: number;
	lookAzimuthDeg: number;
	vividness: number;
}): string {
	return `${arcWords(arcDeg)} of bow, ${vividWords(vividness)}. Stand with the sun behind you and look ${compassWord(lookAzimuthDeg)}.`;
}
