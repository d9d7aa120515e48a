import type { RingFrame } from './ring';
import type { Curtain } from './site';

/** Numbers kept for each ring. */
export const RING_STRIDE = 14;

/** Conditions that one curtain or wall can set. */
const MOST_CONDITIONS = 6;

/**
 * The rings of bow of several curtains about one sun: d(phi) = axis cos rho + (up cos phi + right sin phi)
 * sin rho, each curtain with its own rho.
 *
 * For each ring `parts` holds, RING_STRIDE apart:
 * - 0 to 2, 3 to 5, 6 to 7: axis cos rho, up sin rho, right sin rho (right is level);
 * - 8 to 10 and 11 to 13: the same three against the curtain's level normal and against its length.
 */
export class Rings {
	readonly parts: Float64Array;
	/** Conditions on a ring, as `clipAll` takes them. */
	readonly conditions = new Float64Array(3 * MOST_CONDITIONS);
	/** Unit vector to the sun. */
	readonly sun = new Float64Array(3);
	private readonly curtains: readonly Curtain[];

	constructor(curtains: readonly Curtain[]) {
		this.curtains = curtains;
		this.parts = new Float64Array(curtains.length * RING_STRIDE);
	}

	/** Lays the rings about a sun. */
	set({ sun, axis, up, right }: RingFrame): void {
		const { parts } = this;
		this.sun[0] = sun.x;
		this.sun[1] = sun.y;
		this.sun[2] = sun.z;
		for (let c = 0; c < this.curtains.length; c++) {
			const { cosRadius, sinRadius, acrossX, acrossY, alongX, alongY } = this.curtains[c]!;
			const at = c * RING_STRIDE;
			parts[at] = axis.x * cosRadius;
			parts[at + 1] = axis.y * cosRadius;
			parts[at + 2] = axis.z * cosRadius;
			parts[at + 3] = up.x * sinRadius;
			parts[at + 4] = up.y * sinRadius;
			parts[at + 5] = up.z * sinRadius;
			parts[at + 6] = right.x * sinRadius;
			parts[at + 7] = right.y * sinRadius;
			parts[at + 8] = (acrossX * axis.x + acrossY * axis.y) * cosRadius;
			parts[at + 9] = (acrossX * up.x + acrossY * up.y) * sinRadius;
			parts[at + 10] = (acrossX * right.x + acrossY * right.y) * sinRadius;
			parts[at + 11] = (alongX * axis.x + alongY * axis.y) * cosRadius;
			parts[at + 12] = (alongX * up.x + alongY * up.y) * sinRadius;
			parts[at + 13] = (alongX * right.x + alongY * right.y) * sinRadius;
		}
	}

	/**
	 * Makes condition k the directions of ring c with g . d + room >= 0.
	 * @returns nothing: the condition stands in `conditions`
	 */
	require(k: number, c: number, gx: number, gy: number, gz: number, room: number): void {
		const { parts, conditions } = this;
		const at = c * RING_STRIDE;
		conditions[3 * k] = gx * parts[at]! + gy * parts[at + 1]! + gz * parts[at + 2]! + room;
		conditions[3 * k + 1] = gx * parts[at + 3]! + gy * parts[at + 4]! + gz * parts[at + 5]!;
		conditions[3 * k + 2] = gx * parts[at + 6]! + gy * parts[at + 7]!;
	}
}
