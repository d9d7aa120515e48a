/** A drop diameter of a spray with its part in the light. */
export interface DropClass {
	readonly dropDiameterUm: number;
	/** Share of all drops by number; all classes together make 1. */
	readonly number: number;
}

/** Geometric standard deviation of drop diameters that a spray is taken to have. */
export const GEOMETRIC_DEVIATION = 1.2;

/** Classes that a spray is cut into, and how many standard deviations of ln D they reach each way. */
const CLASSES = 13;
const REACH = 2.5;

/**
 * A log-normal spray about a volume median diameter, in classes even in ln D. By number its median lies at
 * the volume median over exp(3 ln^2 deviation): Hatch and Choate, J. Franklin Inst. 207, 369 (1929). The
 * classes lie about the diameters that scatter the bow's light, which goes with D^(7/3).
 *
 * @param dropDiameterUm volume median, above 0
 */
export function dropClasses(dropDiameterUm: number): DropClass[] {
	const deviation = Math.log(GEOMETRIC_DEVIATION);
	const byNumber = Math.log(dropDiameterUm) - 3 * deviation ** 2;
	const byLight = byNumber + (7 / 3) * deviation ** 2;
	const classes = Array.from({ length: CLASSES }, (_, i) => {
		const logDiameter = byLight + deviation * REACH * ((2 * i) / (CLASSES - 1) - 1);
		const off = (logDiameter - byNumber) / deviation;
		return { dropDiameterUm: Math.exp(logDiameter), number: Math.exp((-off * off) / 2) };
	});
	const all = classes.reduce((sum, { number }) => sum + number, 0);
	return classes.map(({ dropDiameterUm: d, number }) => ({
		dropDiameterUm: d,
		number: number / all
	}));
}
