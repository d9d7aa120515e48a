import type { Sheet } from './site';
import type { Vector } from './vector';

/** Sheets nearer than this to one plane lie in it; an eye nearer than this to a sheet is in it. Metres. */
export const PLANE_TOLERANCE_M = 1e-9;

/** Distance of a place from a sheet's plane, metres, positive to the left of `along`. */
export function planeDistance(sheet: Sheet, x: number, y: number): number {
	return sheet.acrossX * (x - sheet.x) + sheet.acrossY * (y - sheet.y);
}

/** Whether both ends of one sheet lie in the plane of another. */
export function inOnePlane(a: Sheet, b: Sheet): boolean {
	const endX = b.x + b.alongX * b.widthM;
	const endY = b.y + b.alongY * b.widthM;
	return (
		Math.abs(planeDistance(a, b.x, b.y)) < PLANE_TOLERANCE_M &&
		Math.abs(planeDistance(a, endX, endY)) < PLANE_TOLERANCE_M
	);
}

/** The four corners of a sheet. */
export function cornersOf(sheet: Sheet): Vector[] {
	const endX = sheet.x + sheet.alongX * sheet.widthM;
	const endY = sheet.y + sheet.alongY * sheet.widthM;
	return [
		{ x: sheet.x, y: sheet.y, z: sheet.bottomM },
		{ x: endX, y: endY, z: sheet.bottomM },
		{ x: endX, y: endY, z: sheet.topM },
		{ x: sheet.x, y: sheet.y, z: sheet.topM }
	];
}
