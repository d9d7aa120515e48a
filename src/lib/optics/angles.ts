/** Degrees stand at the edges of the core; radians stay inside it. */

/** Radians in one degree. */
export const RAD_PER_DEG = Math.PI / 180;

/** Degrees in one radian. */
export const DEG_PER_RAD = 180 / Math.PI;

/**
 * The value itself when it is a finite number from `least` to `greatest`, both counted.
 * @throws RangeError naming the value otherwise; NaN and infinities never pass.
 */
export function requireWithin(
	name: string,
	value: number,
	{ least, greatest }: { least: number; greatest: number }
): number {
	// Written so that NaN fails too.
	if (!(value >= least && value <= greatest) || !Number.isFinite(value)) {
		throw new RangeError(`${name} must be from ${least} to ${greatest}, not ${value}`);
	}
	return value;
}
