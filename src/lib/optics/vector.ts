/** A direction or place in the site frame: x east, y north, z up. */
export interface Vector {
	readonly x: number;
	readonly y: number;
	readonly z: number;
}

/** a . b */
export function dot(a: Vector, b: Vector): number {
	return a.x * b.x + a.y * b.y + a.z * b.z;
}
