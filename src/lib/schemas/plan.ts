import { z } from 'zod';
import { DROP_DIAMETER_RANGE_UM } from '../optics/bow-radius';
import { MOST_SPACINGS, spacingsAcross } from '../optics/lattice';
import { crossesItself, polygonArea } from '../optics/polygon';
import { WATER_TEMPERATURE_RANGE_C } from '../optics/water';
import { isTimeZone } from '../schedule/local-clock';

/**
 * The site plan as files, forms and the interface carry it: the words of the plan's format, lengths in
 * metres and angles in degrees. Every number must be finite. Keys that the format does not know are
 * dropped, not refused, so that a plan written by a later version or with notes of its own still reads.
 * Names may be absent: nothing is computed from them.
 */

/** Litres a minute that a curtain may take. */
const MOST_FLOW_L_PER_MIN = 100_000;

/** Furthest that a corner may lie from the datum, and highest that a sheet may reach, in metres. */
const FURTHEST_M = 10_000;

const number = ({ least, greatest }: { least: number; greatest: number }) =>
	z
		.number({
			error: (issue) => (issue.input === undefined ? 'is missing' : 'must be a finite number')
		})
		.refine((value) => value >= least && value <= greatest, {
			error: `must be from ${least} to ${greatest}`
		});

const list = <T extends z.ZodType>(element: T, { least, most }: { least: number; most: number }) =>
	z
		.array(element, {
			error: (issue) => (issue.input === undefined ? 'is missing' : 'must be a list')
		})
		.min(least, `must have at least ${least}`)
		.max(most, `must have at most ${most}`);

const fields = <T extends z.core.$ZodLooseShape>(shape: T) =>
	z.object(shape, {
		error: (issue) => (issue.input === undefined ? 'is missing' : 'must be an object')
	});

const length = number({ least: -FURTHEST_M, greatest: FURTHEST_M });
const name = z.string('must be text').max(200, 'must have at most 200 characters').optional();
const point = z.tuple([length, length], {
	error: (issue) => (issue.input === undefined ? 'is missing' : 'must be [x, y] in metres')
});

/** A sheet's ends nearer together than this have no direction, metres. */
const LEAST_WIDTH_M = 1e-6;

const sheetShape = { name, from: point, to: point, bottom: length, top: length };

interface SheetLike {
	from: [number, number];
	to: [number, number];
	bottom: number;
	top: number;
}

const isPoint = (value: unknown): value is [number, number] =>
	Array.isArray(value) && value.length === 2 && value.every(Number.isFinite);

/** A rule over several fields is told even when other fields are wrong, not only after they are mended. */
const withSheetRules = <T extends z.ZodType<SheetLike>>(sheet: T) =>
	sheet
		.refine(({ from, to }) => Math.hypot(to[0] - from[0], to[1] - from[1]) >= LEAST_WIDTH_M, {
			path: ['to'],
			error: 'must differ from "from": the sheet has no width',
			when: ({ value }) => {
				const { from, to } = (value ?? {}) as Partial<SheetLike>;
				return isPoint(from) && isPoint(to);
			}
		})
		.refine(({ bottom, top }) => top > bottom, {
			path: ['top'],
			error: 'must be above bottom',
			when: ({ value }) => {
				const { bottom, top } = (value ?? {}) as Partial<SheetLike>;
				return Number.isFinite(bottom) && Number.isFinite(top);
			}
		});

const curtainSchema = withSheetRules(
	fields({
		...sheetShape,
		/** Volume median, micrometres. */
		dropDiameter: number(DROP_DIAMETER_RANGE_UM),
		/** Degrees C; 15 when absent. */
		waterTemperature: number(WATER_TEMPERATURE_RANGE_C).optional(),
		/** Litres a minute of all its nozzles together; no window depends on it. Unknown when absent. */
		waterFlow: number({ least: 0, greatest: MOST_FLOW_L_PER_MIN }).optional(),
		/** True when absent. */
		enabled: z.boolean('must be true or false').optional()
	})
);

const wallSchema = withSheetRules(fields(sheetShape));

const outlineSchema = list(point, { least: 3, most: 500 }).superRefine((outline, context) => {
	if (outline.length < 3) return;
	const thin = !(polygonArea(outline) > 0) || !(spacingsAcross(outline) <= MOST_SPACINGS);
	if (outline.length > 3 && crossesItself(outline)) {
		context.addIssue({ code: 'custom', message: 'must not cross or touch itself' });
	} else if (thin) {
		context.addIssue({ code: 'custom', message: 'must enclose an area to stand in' });
	}
});

const zoneSchema = fields({
	name,
	outline: outlineSchema,
	/** Metres above datum. */
	floor: length,
	/** Metres above the floor. */
	eyeHeights: list(number({ least: 0, greatest: 100 }), { least: 1, most: 20 })
});

/** The skyline alone, for what is being typed. */
export const skylineSchema = list(
	z.tuple([number({ least: 0, greatest: 360 }), number({ least: -90, greatest: 90 })], {
		error: (issue) =>
			issue.input === undefined ? 'is missing' : 'must be [azimuth, altitude] in degrees'
	}),
	{ least: 0, most: 3600 }
).superRefine((skyline, context) => {
	skyline.forEach(([azimuth], i) => {
		const before = skyline[i - 1];
		if (azimuth === 360) {
			context.addIssue({ code: 'custom', path: [i, 0], message: 'must be below 360' });
		} else if (before && !(azimuth > before[0])) {
			context.addIssue({
				code: 'custom',
				path: [i, 0],
				message: `must be above the azimuth before it, ${before[0]}`
			});
		}
	});
});

const ruleSchema = fields({
	/** Degrees of bow that a visitor must see. */
	minimumArc: z
		.number({
			error: (issue) => (issue.input === undefined ? 'is missing' : 'must be a finite number')
		})
		.refine((value) => value > 0 && value <= 360, { error: 'must be above 0, to 360' }),
	/** Fraction of the zone's eyes that must have the bow. */
	minimumShare: z
		.number({
			error: (issue) => (issue.input === undefined ? 'is missing' : 'must be a finite number')
		})
		.refine((value) => value > 0 && value <= 1, { error: 'must be above 0, to 1' }),
	/** Degrees; lower suns are left out, refraction being anybody's guess. */
	minimumSunAltitude: number({ least: 0.5, greatest: 90 })
});

/** The whole plan. */
export const planSchema = fields({
	name,
	latitude: number({ least: -90, greatest: 90 }),
	longitude: number({ least: -180, greatest: 180 }),
	/** Metres above the sea. */
	elevation: number({ least: -500, greatest: 9000 }),
	timeZone: z
		.string({ error: (issue) => (issue.input === undefined ? 'is missing' : 'must be text') })
		.refine(isTimeZone, { error: 'must be an IANA time zone such as Europe/Paris' }),
	skyline: skylineSchema,
	curtains: list(curtainSchema, { least: 0, most: 500 }),
	walls: list(wallSchema, { least: 0, most: 500 }).optional(),
	zones: list(zoneSchema, { least: 0, most: 100 }),
	rule: ruleSchema
});

/** A plan that the schema accepts. */
export type Plan = z.infer<typeof planSchema>;
export type PlanCurtain = Plan['curtains'][number];
export type PlanWall = NonNullable<Plan['walls']>[number];
export type PlanZone = Plan['zones'][number];
export type PlanRule = Plan['rule'];
export type Skyline = Plan['skyline'];

/** One thing wrong with a plan. */
export interface PlanFault {
	/** JSON path, as in `curtains[0].top`; `plan` for the whole. */
	readonly path: string;
	readonly message: string;
}

/** JSON path in words: `['curtains', 0, 'top']` is `curtains[0].top`. */
export function jsonPath(keys: readonly PropertyKey[]): string {
	const path = keys
		.map((key) => (typeof key === 'number' ? `[${key}]` : `.${String(key)}`))
		.join('')
		.replace(/^\./, '');
	return path === '' ? 'plan' : path;
}

/**
 * Reads a plan of unknown shape.
 * @returns the plan, or every fault found in it, each with its JSON path, in the plan's order
 */
export function readPlan(
	input: unknown
): { ok: true; plan: Plan } | { ok: false; faults: PlanFault[] } {
	const result = planSchema.safeParse(input);
	if (result.success) return { ok: true, plan: result.data };
	return {
		ok: false,
		faults: result.error.issues.map((issue) => ({
			path: jsonPath(issue.path),
			message: issue.message
		}))
	};
}
